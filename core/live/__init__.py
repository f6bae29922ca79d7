"""Instant model: design equations, cavity multi-port, branch network."""
