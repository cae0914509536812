"""`python -m passplan`."""

from passplan.cli import main

main()
