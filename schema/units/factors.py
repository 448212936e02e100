"""A product of units → its factor to SI and its dimension, by pint.

pint sees only names that stand in ``units.txt``, never a maker's text. It is imported when a
product is met for the first time that is not in ``factors.txt``, where the factors of
everyday units are kept: so a search with its few quantities starts without pint.
"""

from functools import cache, lru_cache
from importlib.resources import files

from .table import Powers, Product, table
from .text import read_products, variants


@lru_cache(maxsize=4096)
def evaluate(product: Product) -> tuple[float, str]:
    """Factor to coherent SI units, and the dimension in one canonical text.

    The power of ten is kept as a whole number until the end, so that g·cm² is 1e-07 exactly.
    """
    factor, dimension = _frozen().get(_key(product.powers)) or _by_pint(product.powers)
    if product.tens.denominator != 1:
        return factor * 10.0 ** float(product.tens), dimension
    return float(f"{factor!r}e{int(product.tens)}") if "e" not in repr(factor) else (
        factor * float(f"1e{int(product.tens)}")
    ), dimension


@cache
def _frozen() -> dict[str, tuple[float, str]]:
    text = files("motorfolio.schema.units").joinpath("factors.txt").read_text(encoding="utf-8")
    rows = (line.split("\t") for line in text.splitlines() if line and not line.startswith("#"))
    return {key: (float(factor), dimension) for key, factor, dimension in rows}


@cache
def _registry():
    import pint

    registry = pint.UnitRegistry(None)  # pyright: ignore[reportArgumentType]
    for name, definition in table().definitions.items():
        registry.define(f"{name} = {definition}")
    return registry


def _key(powers: Powers) -> str:
    return " ".join(f"{name}^{exponent}" for name, exponent in powers) or "1"


def _by_pint(powers: Powers) -> tuple[float, str]:
    registry = _registry()
    unit = registry.Unit("")
    for name, exponent in powers:
        whole = exponent.denominator == 1
        unit = unit * registry.Unit(name) ** (int(exponent) if whole else float(exponent))
    base = registry.Quantity(1.0, unit).to_base_units()
    dimensions = sorted((name, exponent) for name, exponent in unit.dimensionality.items())
    return float(base.magnitude), " ".join(f"{n}^{e:g}" for n, e in dimensions) or "1"


def frozen_lines() -> list[str]:
    """The lines of ``factors.txt``: the units under [often] and [targets], by pint."""
    texts = (*table().targets, *table().often)
    products = {p for text in texts for p in read_products(text)}
    every = {variant.powers for product in products for variant, _ in variants(product)}
    rows = sorted((_key(powers), *_by_pint(powers)) for powers in every)
    return [f"{key}\t{factor!r}\t{dimension}" for key, factor, dimension in rows]


if __name__ == "__main__":
    print(
        "# Factors to SI of the units under [often] and [targets] in units.txt, as pint gives them."
    )
    print("\n".join(frozen_lines()))
