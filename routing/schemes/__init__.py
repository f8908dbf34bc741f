"""Room: schemes."""
