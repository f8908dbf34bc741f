"""Slow, obvious references that tests share. The package never imports them."""
