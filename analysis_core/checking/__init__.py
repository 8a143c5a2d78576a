"""Members through the checks, and the lightest section that passes them."""
