"""`python -m app` is the command `armslength`."""

from app.cli.main import main

main()
