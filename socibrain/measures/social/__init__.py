"""Social position, one idea per file."""
