"""Drawing in the 3D view with Coin; needs a window."""
