"""Tables of standards and data sheets: looked up, never computed, with a mark on what is unsure."""
