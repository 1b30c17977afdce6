"""The rules, one file a family."""
