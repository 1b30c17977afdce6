"""Numbers in, numbers out: the formulas behind the judgements, each with its source."""
