"""Composition root: the window and the command line."""
