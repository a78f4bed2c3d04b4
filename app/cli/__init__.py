"""The command line: the only reader of argv, and the only room that prints."""
