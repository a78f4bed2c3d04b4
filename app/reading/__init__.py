"""Text as pasted in, claims tied to their places, and what was not understood, out."""
