"""Results as short tables for a person: units in the headers, cautions last and never left out."""

__all__: list[str] = []
