"""Numbers as papers print them: the text, its decimals, and the set of true values behind it."""
