"""The page that a design review looks at: one HTML file that needs nothing else."""
