"""python -m tests.docs --write: renew what the pages show. Without --write: say what is stale."""

import argparse
import sys
import tempfile
from pathlib import Path

from .pages import ROOT, Page, pages
from .renew import renewed
from .run import prepare, run


def main() -> int:
    """Renew or check the named pages, or all."""
    parser = argparse.ArgumentParser(prog="python -m tests.docs", description=__doc__)
    parser.add_argument("--write", action="store_true", help="write the pages anew")
    parser.add_argument("pages", nargs="*", type=Path)
    told = parser.parse_args()
    stale = 0
    with tempfile.TemporaryDirectory() as name:
        prepared = Path(name) / "prepared"
        prepared.mkdir()
        prepare(prepared)
        for number, path in enumerate(told.pages or pages()):
            page = Page.read(path.absolute())
            folder = Path(name) / str(number)
            folder.mkdir()
            new = renewed(page, list(run(page, folder, prepared)))
            if new == page.lines:
                continue
            stale += 1
            shown = page.path.relative_to(ROOT)
            if told.write:
                page.path.write_text("\n".join(new) + "\n", encoding="utf-8")
            print(f"{shown}: {'renewed' if told.write else 'stale'}")
    if stale and not told.write:
        print("python -m tests.docs --write renews them; read the difference before you keep it.")
    return 1 if stale and not told.write else 0


if __name__ == "__main__":
    sys.exit(main())
