"""A trial's effect carried to another starting risk: what stays the same is an assumption, and is said."""
