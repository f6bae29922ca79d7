"""Project files, and files written whole or not at all."""
