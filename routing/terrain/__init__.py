"""Room: terrain."""
