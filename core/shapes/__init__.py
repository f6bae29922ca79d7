"""Outlines with true arcs, and their way to and from shapely polygons."""
