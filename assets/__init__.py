"""Data files of the workbench, read through importlib.resources."""
