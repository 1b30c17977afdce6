"""Pictures of a description: geometry in modules of their own, drawn by templates."""
