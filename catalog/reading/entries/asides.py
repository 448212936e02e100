"""What a note says of other values than the table's: "not rms", "divide by 1.414 for rms"."""

import re

_WORD = (
    r"(?:r\.?m\.?s\.?|effektiv\w*|effica\w*|eficaz|eficaces|peak\w*|scheitel\w*|spitzen\w*"
    r"|amplitud\w*|cr[êe]te|picco|pico|phases?|lines?|strang\w*|leiter\w*|fas[ei]s?|neutr\w*)"
)
_MORE = (
    r"(?:[-/ ]+(?:to|zu|gegen|à|al?|e|et|y|und|and|or|oder|values?|wert\w*|the|den?|le|la|il|el"
    rf"|{_WORD}))*"
)
_DENIED = re.compile(
    r"\b(?:not(?! (?:otherwise|stated|noted|specified|indicated))|nor|no(?![ .-]?load| se\b|\.)"
    r"|nicht(?! anders)|kein\w*|non(?!-| (?:diversamente|altrimenti))|pas|ni"
    r"|instead of|rather than|(?:an)?statt|anstelle(?: von)?|au lieu d[eu']|plutôt que"
    r"|invece (?:di|del)|anzich[ée]|en (?:lugar|vez) del?)"
    rf"(?:[ '][\w']{{1,9}}){{0,3}}?[ '-]{_WORD}(?!\w){_MORE}",
    re.IGNORECASE,
)
_DENIED_CJK = re.compile(
    r"[^，,、。；;（()）\s]*?(?:ではなく|ではない|ではありません|でない|じゃない)"
    r"|(?:而?不是|而非|并非|非)(?:[线線相]|有效值|峰值|均方根|rms)[^，,、。；;（()）\s]*",
    re.IGNORECASE,
)
_NOT_GIVEN = re.compile(
    r"[^.;:()]*\b(?:not|nicht|pas|non|no)\s+(?:is |are |se |sono |wird |werden )?"
    r"(?:given|published|shown|available|listed|angegeben|genannt|indiqu\w+|indicat\w+|indicad\w+)",
    re.IGNORECASE,
)
_TURNED = re.compile(
    r"(?<!\d)(?:1[.,]41\d*|0?[.,]707\d*)(?!\d)|√\s?2|\bdivi[ds]\w*|\bmultipl\w*|\bmoltiplic\w*"
    r"|\bteil(?:en|e|t)\b|\bconver[ts]\w*|\bumrechn\w*|\bumgerechn\w*|割|掛け|除以|乘以",
    re.IGNORECASE,
)
_PURPOSE = re.compile(
    r"^\W*(?:(?:in order )?to|for|um|für|pour|per (?:il|lo|la|ottenere|avere|convertire)|para)\b",
    re.IGNORECASE,
)
_SENTENCE = re.compile(r"(?:[;；。()（）]|\.(?!\d))")
_CLAUSE = re.compile(r"(?:,(?!\d)|[，、])")


def without_asides(text: str) -> str:
    """The text less what it denies or tells how to convert: what stays holds for the table."""
    text = re.sub(r"sqrt\s?\(?2\)?", "√2", text, flags=re.IGNORECASE)
    text = re.sub(r"\br\.m\.s\.?", "rms", text, flags=re.IGNORECASE)
    for pattern in (_DENIED_CJK, _NOT_GIVEN, _DENIED):
        text = pattern.sub(" ", text)
    kept: list[str] = []
    for sentence in _parted(_SENTENCE, text):
        if _TURNED.search(sentence):
            clauses = _parted(_CLAUSE, sentence)
            sentence = "".join(
                c for c in clauses if not _TURNED.search(c) and not _PURPOSE.match(c)
            )
        kept.append(sentence)
    return "".join(kept)


def _parted(border: re.Pattern[str], text: str) -> list[str]:
    """The parts of a text, each with the sign that ends it."""
    parts, start = [], 0
    for found in border.finditer(text):
        parts.append(text[start : found.end()])
        start = found.end()
    return [*parts, text[start:]]
