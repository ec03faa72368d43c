"""One row per person (and visit); who is missing what, and why."""
