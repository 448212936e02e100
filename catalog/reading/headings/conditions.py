"""How a heading says what its figures hold under: a temperature, a voltage, a speed, a place."""

import re

TEMPERATURE = re.compile(
    r"(?:(?:@|at|bei|à|a|T(?:amb|ref|w|_?0)?\s*=|ϑ\s*=|θ\s*=|,)\s*)?"
    r"\(?(?P<t>[+-]?\d{1,3}(?:[.,]\d)?)\s*(?:°\s*C|℃|deg\.?\s*C|º\s*C|C\b)\)?(?:\s*時|\s*时)?"
    r"(?:\s+amb(?:ient)?\b\.?|\s+(?:Umgebung(?:stemperatur)?|ambiante|ambiente)\b)?"
)
TOLERANCE = re.compile(r"(?:±|\+/-|\+-)\s*(?P<tol>\d+(?:[.,]\d+)?)\s*%")
CONDITION = re.compile(
    r"(?:(?:@|at|bei|à|a|con|sous)\s+)?(?P<c>\b\d{1,3}(?:[.,]\d+)?\s*(?:k?V\s*(?:AC|DC)?|VAC|VDC|K)\b|\bS[1-9](?:[\s-]*\d+\s*%)?)"
    r"|(?:@|\b(?:at|bei|à|a)\b)\s*(?P<speed>\d[\d.,' ]*"
    r"(?:rpm|r/min|min-1|min\^-1|1/min|U/min|tr/min|giri/min))"
)
LEVER = re.compile(
    r"[,;]?\s*(?P<at>(?:at\s+|bei\s+|à\s+|a\s+)?\d+(?:[.,]\d+)?\s*mm\s+(?:from|off|ab|von|vom|vor|du|de"
    r"|depuis|dal|dalla|da|desde|del)\b[^\[\]()]*?)(?=\s*[\[(]|\s+(?:k?N|lbf?|kgf)$|$)"
)
"""Where on the shaft a load acts: "5 mm from flange"."""
RISE = re.compile(
    r"[,;]?\s*(?P<at>(?:(?:at|bei|à|a)\s+|@\s*)?\d{1,3}\s*(?:°\s*C|K)\s+(?:temperature\s+)?rise\b)",
    re.IGNORECASE,
)
"""How far the winding may warm: "at 100 °C rise" is no temperature."""
CONDITION_ONLY = re.compile(
    r"(?:(?:@|at|bei|à)\s+)?(?:[^\W\d]{1,6}\s*=\s*)?\d{1,3}(?:[.,]\d+)?\s*(?:V\s*(?:AC|DC)?|VAC|VDC|K|°C|℃)"
    r"|S[1-9](?:[\s-]*\d+\s*%)?"
)
WITH_SOME = re.compile(
    r"(?:with|mit|avec|con|bei)\s+(?:a\s+|an\s+)?(?:shaft|Welle|arbre|albero|eje)\b", re.IGNORECASE
)
"""Says how it was measured: "(with shaft ø 6 mm)"."""
ONLY_VOLTS = re.compile(r"m?V\s?(?:AC|DC|_?rms|_?eff|_?pk|_?peak)?", re.IGNORECASE)
A_SPEED = re.compile(r"\d[\d.,' ]*(?=rpm|r/min|min|1/min|U/min|tr/min|giri/min)")
