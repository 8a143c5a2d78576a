"""Lines through the solver along the load path, and what follows from it for each line."""
