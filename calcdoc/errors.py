"""Trouble outside the text: the world is wrong, not the design.

A mistake in a design text is a finding (see :mod:`calcdoc.problems`) and is returned.
What is raised here ends a command with exit status 3 and one sentence.
"""


class CalcdocError(Exception):
    """The world is wrong; the message is one sentence that says what to do."""


class FileTrouble(CalcdocError):
    """A file or folder cannot be read or written."""


class MissingLibrary(CalcdocError):
    """A system library or font that a form of output needs is not installed."""
