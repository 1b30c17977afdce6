"""Levels made without a reference: facts, the level corner by corner, and the sweep over all corners."""
