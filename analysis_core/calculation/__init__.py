"""What the calculation sheet holds: gathered here, laid out by ``sheet``."""
