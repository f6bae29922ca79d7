"""The workbench: command line, window and everything that talks to a person."""
