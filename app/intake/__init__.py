"""Strings in (form, JSON), input out, or every problem at once. The only room that words a refusal."""
