"""What heads the smallest, the usual and the largest figure of one motor: Min, Typ, Max."""

from ....schema.figure.signs import plain

_ENDS = {
    "min": "least", "minimum": "least", "mindest": "least", "minimal": "least", "minimo": "least",
    "minimum value": "least", "最小": "least", "最小值": "least",
    "typ": "usual", "typical": "usual", "nom": "usual", "nominal": "usual", "value": "usual",
    "typisch": "usual", "nenn": "usual", "typique": "usual", "tipico": "usual", "標準": "usual",
    "典型": "usual", "典型值": "usual", "wert": "usual", "nennwert": "usual",
    "max": "most", "maximum": "most", "maximal": "most", "massimo": "most", "maximo": "most",
    "最大": "most", "最大值": "most",
}  # fmt: skip


def end_of(text: str) -> str | None:
    """ "least", "usual" or "most" where a heading says no more than that, else None."""
    word = plain(text).casefold().strip(" .:*").replace("í", "i").replace("á", "a")
    return _ENDS.get(word)
