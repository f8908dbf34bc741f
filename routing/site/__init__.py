"""The site file: what the user asks, read and checked into frozen records; its starter, schema and reference page."""

from routing.site.loading import load_site
from routing.site.reference import reference_page, schema
from routing.site.starter import starter

__all__ = ["load_site", "reference_page", "schema", "starter"]
