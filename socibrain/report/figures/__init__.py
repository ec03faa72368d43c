"""Figures of the page, one in a file."""
