"""The few words of generated pages that the code does not hold; tests want them complete."""

FURTHER_RELATIONS = ("efficiency-below-one", "operating-points")
"""Names of findings that stand in the code where they are made."""

ENTRY_KEYS = ("part_number", "maker", "series")
"""The keys of an entry that are no figures: those are on a page of their own."""

TABLES = {
    "quantities": "a figure key, with its SI unit",
    "imports": "a call of `import`, or a removal",
    "files": "a file of an import, with its fingerprint",
    "sources": "a table of a file",
    "conventions": "a set of conventions",
    "headings": "a heading of a table: text, what it was read as, factor to SI, why",
    "patterns": "where a figure stands in a table's rows or columns, and its convention",
    "kinds": "a kind of motor: commutation, magnets, reference temperature",
    "motor": "a motor, or an earlier revision of one",
    "figure_text": "a motor's figures as printed",
    "figure_value": "a motor's figures in SI",
    "figure_digit": "the power of ten of each figure's last printed digit",
    "figure_intervals": "an interval that the digits don't tell: a printed ± or range",
    "figure_places": "a figure that stands elsewhere than its pattern says",
    "figure_qualifiers": "a figure with a qualifier, such as “at most”",
    "further_figures": "a figure given once more, or under another condition",
    "points": "a figure of an operating point",
    "derivations": "how a constant was come by: basis and figures",
    "constants": "a motor's constants, with intervals, in SI at 25 °C",
    "findings": "a finding",
    "finding_motors": "the motors that a finding concerns, as ranges of ids",
    "unread": "a cell or heading that was not understood, and why",
    "corrections": "a correction with its reason; revoked ones stay",
    "applied_corrections": "what a correction stands in place of",
    "merged": "motors that a person said are one: the name, and the one it stands for",
    "kept_readings": "a reading of a heading, kept for a maker's further files",
    "column_cache": "a column of a source as one block of numbers, for a quick search",
    "gear": "a gear of a table, current or an earlier revision",
}

VIEWS = {
    "motors": "a motor that is current: who it is, constants and figures in SI, place",
    "figures_as_published": "a figure: printed text, heading, unit, SI value, place",
    "findings_plain": "a finding with its motor, file and place",
    "gears": "a gear that is current",
}

DEPENDENCIES = {
    "click": "commands, options, help and shell completion",
    "lxml": "web pages and what workbooks hold, damaged ones too",
    "numpy": "all arithmetic over many motors",
    "pint": "dimension and factor of a clean unit, radian included",
    "pydantic": "documents that come and go, with their JSON Schema",
    "pypdfium2": "text of PDF pages with its place",
    "python-calamine": "old and binary workbooks",
    "rapidfuzz": "headings that are spelt a little otherwise",
    "rich": "tables on a terminal",
    "sqlite-utils": "tables, views and indexes of the catalog",
    "matplotlib": "pictures as SVG or PNG",
    "pyarrow": "Parquet files",
    "basedpyright": "types",
    "control": "a reference for the motor's response over time",
    "cosmic-ray": "small faults put into the code, to see that tests notice",
    "coverage": "which tests run the line that such a fault is in",
    "hypothesis": "properties over many inputs",
    "jsonschema": "printed documents held against their schemas",
    "openpyxl": "workbooks made for tests",
    "pandas": "the data frames that the library hands out",
    "playwright": "the page, opened in a browser without a window",
    "pytest": "tests",
    "pytest-benchmark": "speed, as a ratio within one run",
    "pytest-xdist": "tests on all processors",
    "reportlab": "PDF sheets made for tests",
    "ruff": "lint and layout",
    "scipy": "a reference for integrals and unit factors",
    "scipy-stubs": "types of scipy",
    "lxml-stubs": "types of lxml",
}
