"""`python -m filtercheck`."""

from filtercheck.cli import run

run()
