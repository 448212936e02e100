"""Run as a program of its own: a binary workbook on standard input, its cells as JSON lines.

The library that opens XLS and XLSB ends the whole process on some damaged files, and takes
whatever memory a damaged length asks for. Here only this process ends, and its memory is
limited where the system can. Nothing of this package is imported.

Output: one line [name, hidden, merged ranges] a sheet, then a line [cells] a row, then null;
or {"error": text}. A cell is a text, a number, true or false, or [kind, text] of a date.
"""

import contextlib
import datetime
import io
import json
import sys

_MOST_MEMORY = 1_500_000_000


def main() -> None:
    with contextlib.suppress(ImportError, OSError, ValueError):
        import resource

        resource.setrlimit(resource.RLIMIT_AS, (_MOST_MEMORY, _MOST_MEMORY))
    import python_calamine as calamine

    try:
        book = calamine.load_workbook(io.BytesIO(sys.stdin.buffer.read()))
        for meta in book.sheets_metadata:
            if meta.typ != calamine.SheetTypeEnum.WorkSheet:
                continue
            sheet = book.get_sheet_by_name(meta.name)
            rows = sheet.to_python(skip_empty_area=False)
            hidden = meta.visible != calamine.SheetVisibleEnum.Visible
            _put([meta.name, hidden, sheet.merged_cell_ranges or []])
            for row in rows:
                _put([_plain(value) for value in row])
            _put(None)
    except calamine.PasswordError:
        _put({"error": "password"})
    except calamine.CalamineError as error:
        _put({"error": str(error)})


def _put(value: object) -> None:
    sys.stdout.write(json.dumps(value) + "\n")


def _plain(value: object) -> object:
    if isinstance(value, datetime.time | datetime.timedelta):
        return ["time", str(value)]
    if isinstance(value, datetime.date):
        return ["date", str(value)]
    return value


if __name__ == "__main__":
    main()
