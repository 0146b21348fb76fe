"""What is said when we are wrong: a fault of the program must not look like one of the text."""

from traceback import extract_tb

from calcdoc import __version__


def our_fault(trouble: Exception) -> str:
    """Where the program failed, and what to send us."""
    at = extract_tb(trouble.__traceback__)[-1]
    place = f"{at.filename.rpartition('calcdoc')[2].lstrip('/')}:{at.lineno}"
    return (
        f"internal-error in {place}: {type(trouble).__name__}: {trouble}\n"
        f"This is a fault of calcdoc {__version__}, not of your text. Please send us this"
        " line with the text that led to it."
    )
