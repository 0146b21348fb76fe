"""Methods: sheets of the library and of the project, and what applying one makes of a design."""
