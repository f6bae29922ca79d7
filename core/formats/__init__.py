"""Sheets and parts to bytes, one module per file format."""
