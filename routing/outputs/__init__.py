"""Room: outputs."""
