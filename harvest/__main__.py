"""``python -m harvest``: the same as the command ``harvest``."""

from harvest.cli import main

main()
