"""Trip levels: where they lie, what they protect, where they may be placed, and what gives them room."""
