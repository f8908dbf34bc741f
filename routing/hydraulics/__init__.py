"""Room: hydraulics."""
