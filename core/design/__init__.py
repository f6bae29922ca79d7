"""A Design and its parts: frozen, validated, stored as a plain record."""
