"""The verbs of the command line: thin, and without a window."""
