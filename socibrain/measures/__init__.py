"""Networks to numbers with a passport."""
