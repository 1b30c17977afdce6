"""Numbers that several rules derive from the facts of a description: facts in, physics behind, missing facts noted."""
