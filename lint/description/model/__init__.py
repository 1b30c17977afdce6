"""The description as typed, frozen objects; one class for each object of the schema, field by field."""
