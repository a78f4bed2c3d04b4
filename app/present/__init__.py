"""All rounding, wording and drawing: one frozen dataclass per template."""
