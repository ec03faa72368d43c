"""Raw records to checked, immutable networks."""
