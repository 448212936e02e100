"""The fields of a table → quantities, all at once, with reasons and rivals."""
