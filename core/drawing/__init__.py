"""Drawings without a file format: sheets of paths with true arcs, circles and text."""
