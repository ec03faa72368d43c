"""Words, tables, figures; computes no statistics."""
