"""Plan file to frozen options."""
