"""Brain organisation, one idea per file."""
