"""Windows that ask for something and go away."""
