"""The tests, room by room as in app/."""
