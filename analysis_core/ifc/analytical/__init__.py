"""The analytical way in: an analysis model of the open standard becomes a Building."""
