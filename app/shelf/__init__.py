"""The shelf: sheets as typed, in one SQLite file on this computer."""
