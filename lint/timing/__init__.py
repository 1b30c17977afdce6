"""Start-up, dips and power-down: when each element of the graph is held, unknown, valid, asserting or releasing."""
