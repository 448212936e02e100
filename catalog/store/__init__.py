"""The catalog: motors as published and in SI, with every value's place, in one SQLite file.

Importing this package loads only the standard library; what writes tables or makes arrays is
imported when it is used.
"""

from .catalog import Catalog
from .database import CatalogError

__all__ = ["Catalog", "CatalogError"]
