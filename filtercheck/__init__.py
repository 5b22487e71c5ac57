"""Prove in continuous integration that an active filter meets its requirements."""

__version__ = "0.1.0"
