"""The dependency graph of a description, and the questions that rules ask it."""
