"""``python -m calcdoc``."""

from calcdoc.commands import main

main()
