"""One module an area; route functions of at most fifteen lines, no number in them."""
