"""The rows of the registry, one module a kind. Adding a method is one function, one row, one test table."""
