"""What an outcome becomes in a model file: property sets, result groups, and out again."""
