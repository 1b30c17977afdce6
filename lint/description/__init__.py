"""A description: YAML text with places, checked against the schema, as typed and frozen objects."""
