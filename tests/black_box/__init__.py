"""A reference of its own, built from the contract alone, against the real command line."""
