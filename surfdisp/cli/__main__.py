"""`python -m surfdisp.cli` is `surfdisp`."""

from .app import main

main()
