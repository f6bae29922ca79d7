"""Kerfwave core: design, geometry, physics and formats, without a window."""
