"""Claims in, every integer table that could have been printed so out."""
