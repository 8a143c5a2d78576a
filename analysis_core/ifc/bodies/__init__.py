"""Bodies of products as prisms, meshes and curved sweeps, and the sticks they are taken for."""
