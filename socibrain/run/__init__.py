"""The stages in order; owns the output folder."""
