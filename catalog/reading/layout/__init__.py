"""Blocks of cells → tables of motors and fields, whichever way they are laid out."""
