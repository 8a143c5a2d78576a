"""The physical way in: what the model draws becomes a Building."""
