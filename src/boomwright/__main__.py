"""`python -m boomwright` is the command line."""

from boomwright.cli import main

main()
