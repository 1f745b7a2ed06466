"""`python -m fibremr`."""

from fibremr.cli import main

main()
