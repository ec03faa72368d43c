"""Runs many tasks and remembers finished work."""
