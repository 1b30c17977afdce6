"""What disturbs a comparator: neighbours, shared references, and what its hysteresis must cover."""
