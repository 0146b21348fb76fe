"""The pages of a record: one HTML file, and the sheets of a PDF."""
