"""What an antenna does, whichever engine said so."""
