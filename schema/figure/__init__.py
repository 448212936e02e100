"""A printed number: signs, numerals and the grammar of a cell → value, interval, qualifier."""
