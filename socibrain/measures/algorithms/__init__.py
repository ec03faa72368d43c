"""Scale-free numerics: they know arrays only."""
