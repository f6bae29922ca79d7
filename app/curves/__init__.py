"""Curves, Smith chart and pattern as widgets."""
