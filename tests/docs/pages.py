"""Markdown pages taken apart: fenced blocks that are run, regions that are generated."""

import re
from dataclasses import dataclass, field
from pathlib import Path

ROOT = Path(__file__).parent.parent.parent
ELISION = "…"
CATALOG = "<!-- with the sample catalog -->"

_FENCE = re.compile(r"^```(\w+)(.*)$")
_BEGIN = re.compile(r"^<!-- generated: (.+) -->$")
_END = "<!-- end -->"


def pages() -> list[Path]:
    """Every page whose examples are run."""
    return [
        *(ROOT / name for name in ("README.md", "DEVELOPERS.md", "CHANGELOG.md")),
        *sorted((ROOT / "docs").rglob("*.md")),
    ]


@dataclass
class Step:
    """One command or piece of Python of a page with what stands below it; ``lines`` is the range
    of that text in the page."""

    kind: str
    source: str
    expected: list[str]
    lines: range
    refused: bool = False


@dataclass
class Page:
    """A page: its lines, the steps in order, and the generated regions (name → lines)."""

    path: Path
    lines: list[str]
    steps: list[Step] = field(default_factory=list)
    regions: list[tuple[str, range]] = field(default_factory=list)

    @property
    def wants_catalog(self) -> bool:
        """Whether its examples start with the sample catalog."""
        return CATALOG in self.lines

    @classmethod
    def read(cls, path: Path) -> "Page":
        """The page of a file; ValueError where a fence or region doesn't end."""
        page = cls(path, path.read_text(encoding="utf-8").splitlines())
        at = 0
        while at < len(page.lines):
            line = page.lines[at]
            if fence := _FENCE.match(line):
                end = page._find("```", at)
                page._block(fence[1], fence[2].split(), at + 1, end)
                at = end
            elif region := _BEGIN.match(line):
                end = page._find(_END, at)
                page.regions.append((region[1], range(at + 1, end)))
                at = end
            at += 1
        return page

    def _find(self, text: str, after: int) -> int:
        try:
            return self.lines.index(text, after + 1)
        except ValueError:
            raise ValueError(f"{self.path}:{after + 1}: nothing ends with {text}") from None

    def _block(self, language: str, words: list[str], begin: int, end: int) -> None:
        if language == "python":
            source = "\n".join(self.lines[begin:end])
            expected = range(end + 1, end + 1)
            if self.lines[end + 1 : end + 2] == ["```text"]:
                expected = range(end + 2, self._find("```", end + 1))
            self.steps.append(Step("python", source, self._at(expected), expected))
        elif language == "console":
            self._commands(begin, end, refused="refused" in words)

    def _commands(self, begin: int, end: int, *, refused: bool) -> None:
        if not self.lines[begin].startswith("$ "):
            raise ValueError(f"{self.path}:{begin + 1}: a console block begins with a command")
        starts = [i for i in range(begin, end) if self.lines[i].startswith("$ ")]
        for start, stop in zip(starts, [*starts[1:], end], strict=True):
            last = start
            while self.lines[last].endswith("\\"):
                last += 1
            command = "\n".join([self.lines[start][2:], *self.lines[start + 1 : last + 1]])
            shown = range(last + 1, stop)
            self.steps.append(Step("command", command, self._at(shown), shown, refused))

    def _at(self, where: range) -> list[str]:
        return self.lines[where.start : where.stop]


def matches(expected: list[str], actual: list[str]) -> bool:
    """Whether the output is what stands in the page, a line … for any number of lines."""
    parts = [re.escape(line) + "\n" if line != ELISION else r"(?:.*\n)*?" for line in expected]
    return re.fullmatch("".join(parts), "".join(line + "\n" for line in actual)) is not None
