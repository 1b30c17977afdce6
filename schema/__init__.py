"""JSON Schemas of the description and of the JSON report (data only)."""
