"""Files to raw records: the only rooms that know input formats."""
