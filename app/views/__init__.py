"""Thin widgets: they show a state and say what the user asked."""
