"""Grids of text cells → the entries of motors as published: all understanding of tables."""

from .model import Reading, ReadingError, ReadOptions, Unread
from .read import read

__all__ = ["ReadOptions", "Reading", "ReadingError", "Unread", "read"]
