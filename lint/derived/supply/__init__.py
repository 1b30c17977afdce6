"""What feeds an element, in which order rails come up, and what is taken from them."""
