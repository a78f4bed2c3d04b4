"""Speed, measured and printed; nothing here is a test. Run with `python -m tests.bench`."""
