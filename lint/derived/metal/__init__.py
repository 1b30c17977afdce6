"""The current of a slow edge, and the metal that carries it."""
