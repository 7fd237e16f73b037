"""One file a step of the schema."""
