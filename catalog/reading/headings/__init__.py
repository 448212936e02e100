"""The text of a heading → what it says: names, symbols, units, conventions, conditions."""
