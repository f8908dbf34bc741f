"""Room: search."""
