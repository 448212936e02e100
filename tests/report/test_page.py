"""The page in a browser: nothing asked of any host, nothing run out of a sheet, usable by keyboard,
quick with thousands of motors."""

from __future__ import annotations

import json
import math
import random
import re
from html.parser import HTMLParser
from pathlib import Path

import pytest

from motorfolio.catalog.cli import main
from motorfolio.catalog.report.implied import implied_figures
from motorfolio.catalog.report.page.write import as_json, catalog_page
from motorfolio.schema import written as w
from motorfolio.schema.vocabulary import quantities

from .browser import opened, settled
from .conftest import SAMPLES
from .many import table

EVIL = (
    "Part,Maker,Description,Nominal voltage [V],Terminal resistance [Ω],"
    "Torque constant [mNm/A],Weight [g]\n"
    "</script><script>document.title='ran'</script>,<img src=x onerror=\"document.title='ran'\">,"
    "{{data}} <!--<script>,24,1.20,30.2,310\n"
    "QX-2\u202e\u2028,\"'); document.title='ran'\",<b>bold</b>,24,2.20,40.2,320\n"
)


@pytest.fixture(scope="module")
def catalog_html(catalog: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    path = tmp_path_factory.mktemp("page") / "catalog.html"
    assert main(["page", "-o", str(path), "--catalog", str(catalog)]) == 0
    return path


@pytest.fixture(scope="module")
def search_html(catalog: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    path = tmp_path_factory.mktemp("page") / "search.html"
    asked = ["--torque", "50 mN·m", "--speed", "3000 rpm", "--supply", "24 V", "--ratio", "1..10"]
    assert main(["page", *asked, "-o", str(path), "--catalog", str(catalog)]) == 0
    return path


# ---- without a browser


class Elements(HTMLParser):
    """What a page loads from elsewhere, and its scripts."""

    def __init__(self) -> None:
        super().__init__()
        self.outside: list[str] = []
        self.kinds: list[str | None] = []
        self.handlers: list[str] = []

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        given = dict(attrs)
        for name in ("src", "href", "action", "data", "poster"):
            value = given.get(name) or ""
            if name in given and not value.startswith(("#", "data:")):
                self.outside.append(value)
        self.handlers += [name for name in given if name.startswith("on") or name == "style"]
        if tag == "script":
            self.kinds.append(given.get("type"))


def test_one_file_with_all_in_it(catalog_html: Path, search_html: Path) -> None:
    for path in (catalog_html, search_html):
        text = path.read_text(encoding="utf-8")
        parser = Elements()
        parser.feed(text)
        assert parser.outside == []
        assert parser.handlers == []
        assert parser.kinds.count(None) == 7
        assert "default-src &#x27;none&#x27;" in text
        assert "unsafe" not in text.split("</head>")[0]
        assert "Copyright (c) 2022 Leon Sorokin" in text
        assert "verify against the maker" in text
        assert "{{" not in re.sub(r"(?s)<script.*?</script>", "", text)


def test_the_same_catalog_gives_the_same_page(catalog: Path, catalog_html: Path) -> None:
    from motorfolio.catalog.store import Catalog

    with Catalog.open(catalog) as store:
        assert catalog_page(store, "Motor catalog") == catalog_html.read_text(encoding="utf-8")


@pytest.mark.parametrize(
    "call",
    [
        ["--torque", "900 N·m", "--speed", "9000 rpm", "--supply", "3 V"],
        ["--torque", "1 mN·m", "--speed", "10 rpm", "--where", "mass < 1 mg"],
    ],
)
def test_a_search_that_finds_none_has_a_page_too(
    catalog: Path, tmp_path: Path, call: list[str]
) -> None:
    path = tmp_path / "none.html"
    assert main(["page", *call, "-o", str(path), "--catalog", str(catalog)]) == 0
    with opened(path) as page:
        assert page.locator("#claim").inner_text().startswith("0 of ")


def test_an_empty_catalog_has_a_page_too(tmp_path: Path) -> None:
    store, path = tmp_path / "empty.sqlite", tmp_path / "empty.html"
    assert main(["gears", str(SAMPLES / "gears.csv"), "--catalog", str(store)]) == 0
    for call in ([], ["--torque", "1 mN·m", "--speed", "10 rpm"]):
        assert main(["page", *call, "-o", str(path), "--catalog", str(store)]) == 0
        with opened(path) as page:
            assert page.locator("#rows tr").count() == 0


def test_json_can_not_end_its_element() -> None:
    text = as_json({"a": "</script><!--\u2028&"})
    assert not set(text) & set("<>&\u2028")
    assert json.loads(text) == {"a": "</script><!--\u2028&"}


# ---- in a browser


def test_a_sheet_s_text_never_runs(tmp_path: Path) -> None:
    sheet, store, page_file = (tmp_path / n for n in ("evil.csv", "evil.sqlite", "evil.html"))
    sheet.write_text(EVIL, encoding="utf-8")
    assert main(["import", str(sheet), "--catalog", str(store)]) == 0
    title = "<script>document.title='ran'</script>"
    call = ["page", "-o", str(page_file), "--title", title, "--catalog", str(store)]
    assert main(call) == 0
    with opened(page_file) as page:
        page.locator("button.part").first.click()
        assert page.title() == title
        assert page.locator("#rows img, #card img, #rows b, #card b").count() == 0
        shown = page.locator("#rows").inner_text()
        assert "</script><script>" in shown
        assert "\u202e" not in shown


def test_table_sorts_filters_and_says_so(catalog_html: Path) -> None:
    with opened(catalog_html) as page:
        mass = page.get_by_role("button", name=re.compile("^Mass"))
        mass.click()
        head = page.locator("#heads th", has=mass)
        assert head.get_attribute("aria-sort") == "ascending"
        sizes = page.evaluate(
            "page.state().shown.map(i => model.data.columns.find(c => c.key === 'mass').values[i])"
        )
        assert sizes == sorted(sizes)
        mass.click()
        assert head.get_attribute("aria-sort") == "descending"
        page.get_by_label("Find", exact=True).fill("gopher pika")
        assert page.locator("#count").inner_text().startswith("5 of ")
        assert page.locator("#count").get_attribute("role") == "status"
        page.get_by_label("Findings").select_option("error")
        assert page.locator("#rows tr").count() == 1
        page.locator("#filters button[type=reset]").click()
        page.get_by_text("Limits on figures").click()
        page.get_by_label("Nominal voltage, V from").fill("20")
        page.get_by_label("Nominal voltage, V to").fill("30")
        volts = page.evaluate(
            "page.state().shown.map(i => "
            "model.data.columns.find(c => c.key === 'nominal_voltage').values[i])"
        )
        assert volts
        assert all(20 <= v <= 30 for v in volts)


def test_keyboard_alone_opens_and_closes_a_card(catalog_html: Path) -> None:
    with opened(catalog_html) as page:
        page.locator("button.part").first.focus()
        page.keyboard.press("ArrowDown")
        name = page.evaluate("document.activeElement.textContent")
        page.keyboard.press("Enter")
        assert page.evaluate("document.activeElement.id") == "card-title"
        assert page.locator("#card-title").inner_text() == name
        assert page.locator("#rows tr[aria-current=true]").count() == 1
        page.keyboard.press("Escape")
        assert not page.locator("#card").is_visible()
        assert page.evaluate("document.activeElement.textContent") == name


def test_card_shows_what_the_catalog_knows(catalog: Path, catalog_html: Path) -> None:
    from motorfolio.catalog.store import Catalog

    with Catalog.open(catalog) as store:
        motor, number = store.motor("PIKA-3"), store.find("PIKA-3").id
        implied = implied_figures(store, {number: motor})[number]
    ratio = next(f.ratio for f in implied if f.key == "stall_torque")
    with opened(catalog_html) as page:
        page.get_by_label("Find", exact=True).fill("PIKA-3")
        page.get_by_role("button", name="PIKA-3", exact=True).click()
        text = page.locator("#card").inner_text()
        assert motor["findings"][0]["message"] in text
        assert "gopher_notch.tsv" in text
        for figure in motor["figures"].values():
            assert figure["text"] in text
            assert f"R{figure['cell']['row']} C{figure['cell']['column']}" in text
        low, high = (motor["constants"]["torque_constant"][end] * 1e3 for end in ("low", "high"))
        assert f"{low:.4g} … {high:.4g}" in text
        assert f"×{ratio:.3g}" in text
        chart = page.locator("#card .chart").first
        chart.scroll_into_view_if_needed()
        box = chart.bounding_box()
        page.mouse.move(box["x"] + box["width"] / 2, box["y"] + 80)
        hover = page.locator("#card .hover").first.inner_text()
        assert re.search(r"speed, rpm .*continuous .* mN·m", hover)


def test_settings_judge_anew_and_come_back(search_html: Path) -> None:
    with opened(search_html) as page:
        now = page.locator("#now")
        first = now.inner_text()
        before = page.locator("#rows").inner_text()
        doing = []
        for supply in ("14", "60"):
            page.locator("#supply").fill(supply)
            settled(page)
            doing.append(int(re.search(r"^Now (\d+) of", now.inner_text())[1]))
        assert doing[1] > doing[0]
        assert page.locator("#rows").inner_text() != before
        page.get_by_role("button", name="As asked").click()
        settled(page)
        assert now.inner_text() == first
        assert first.startswith("As asked")
        assert page.locator("#rows").inner_text() == before


def test_what_the_page_refuses_and_leaves_out_is_said(catalog: Path, tmp_path: Path) -> None:
    path = tmp_path / "search.html"
    call = ["page", "--torque", "3 N·m", "--speed", "30 rpm", "--supply", "24 V",
            "--ratio", "2..120", "--where", "mass < 2 kg", "--limit", "2"]  # fmt: skip
    assert main([*call, "-o", str(path), "--catalog", str(catalog)]) == 0
    with opened(path) as page:
        claim = page.locator("#claim").inner_text()
        held = page.evaluate("model.count")
        assert f"The page holds {held} of them, without " in claim
        assert "that the limits on figures refuse" in claim
        doing = page.evaluate("model.data.judged.verdict.filter(v => v === 'yes').length")
        ranks = page.evaluate("model.data.judged.rank.filter(r => r !== null).length")
        assert 2 < ranks <= doing
        page.get_by_label("Supply at its lowest, V", exact=True).first.fill("-3")
        assert "more than 0 V" in page.locator("#now").inner_text()
        assert page.evaluate("page.state().setting.supply") == 24
        page.locator("button.part", has_text="DACHS-24").first.click()
        assert "runs away thermally" in page.locator("#card").inner_text()
        assert "nominal point, as published" in page.locator("#card").inner_text()
        page.get_by_label("Supply at its lowest, V", exact=True).first.fill("")
        page.wait_for_function("document.querySelector('#now').textContent.includes('no limit')")


@pytest.mark.parametrize("scheme", ["light", "dark"])
def test_text_stands_out_in_either_theme(search_html: Path, scheme: str) -> None:
    # WCAG 2.2, success criterion 1.4.3: a contrast of 4.5 for text
    with opened(search_html, color_scheme=scheme) as page:
        lowest = page.evaluate(
            """() => {
            const style = getComputedStyle(document.documentElement);
            const light = name => {
                const hex = style.getPropertyValue(name).trim().slice(1);
                const wide = hex.length === 3 ? [...hex].map(c => c + c).join("") : hex;
                const [r, g, b] = [0, 2, 4].map(i => parseInt(wide.slice(i, i + 2), 16) / 255)
                    .map(v => v <= 0.04045 ? v / 12.92 : ((v + 0.055) / 1.055) ** 2.4);
                return 0.2126 * r + 0.7152 * g + 0.0722 * b;
            };
            let lowest = 99;
            for (const on of ["--paper", "--sheet", "--shade"])
                for (const name of ["--ink", "--soft", "--strong", "--bad", "--doubt"]) {
                    const [a, b] = [light(on), light(name)].sort((x, y) => y - x);
                    lowest = Math.min(lowest, (a + 0.05) / (b + 0.05));
                }
            return lowest;
        }"""
        )
        assert lowest >= 4.5


def test_every_field_has_a_name(search_html: Path) -> None:
    with opened(search_html) as page:
        nameless = page.evaluate(
            """() => [...document.querySelectorAll("input, select, button")].filter(e =>
                !(e.labels && e.labels.length) && !e.ariaLabel && !e.textContent.trim()).length"""
        )
        assert nameless == 0
        assert page.locator("html").get_attribute("lang") == "en"
        assert page.locator("h1").count() == 1


def test_print_has_every_row_and_no_controls(catalog_html: Path) -> None:
    with opened(catalog_html) as page:
        count = page.evaluate("model.count")
        assert page.locator("#rows tr").count() < count
        page.evaluate("dispatchEvent(new Event('beforeprint'))")
        page.emulate_media(media="print")
        assert page.locator("#rows tr").count() == count
        assert not page.locator("#filters").is_visible()
        page.evaluate("dispatchEvent(new Event('afterprint'))")
        assert page.locator("#rows tr").count() < count


def test_five_thousand_motors_repaint_in_a_tenth_of_a_second(tmp_path: Path) -> None:
    """Time on the page's main thread, which other programs on the machine can't lengthen."""
    sheet, store, page_file = (tmp_path / n for n in ("many.csv", "many.sqlite", "many.html"))
    sheet.write_text(table(5000), encoding="utf-8")
    assert main(["import", str(sheet), "--catalog", str(store)]) == 0
    assert main(["page", "-o", str(page_file), "--catalog", str(store)]) == 0
    actions = {
        "sort": "page.sortBy([2, 0, 4, 1][k % 4])",
        "words": "const w = document.getElementById('words'); w.value = `qx-0${k % 5}`;"
        "w.dispatchEvent(new Event('input', {bubbles: true}))",
        "limit": "const l = document.querySelector('#limit-fields input'); l.value = k;"
        "l.dispatchEvent(new Event('input', {bubbles: true}))",
        "page": "document.getElementById('later').click()",
    }
    with opened(page_file) as page:
        assert page.evaluate("model.count") == 5000
        session = page.context.new_cdp_session(page)
        session.send("Performance.enable", {"timeDomain": "threadTicks"})

        def busy() -> float:
            metrics = session.send("Performance.getMetrics")["metrics"]
            return next(m["value"] for m in metrics if m["name"] == "TaskDuration")

        for name, action in actions.items():
            before = busy()
            for k in range(6):
                page.evaluate(
                    f"async k => {{ {action};"
                    "await new Promise(r => requestAnimationFrame(() => setTimeout(r))); }",
                    k,
                )
            assert (busy() - before) / 6 < 0.1, name


NUMBERS = [
    0.0, 1.0, -1.0, 0.5, 0.125, 2.5, 12.345, 1234.5, 12345.0, 12355.0, 0.0001, 0.00012345,
    9.9995e-5, 9.99949e-5, 99.996, 9999999.0, 1e7, 2.5e7, 3.456e-8, 1.5e-9, -0.00075, 1e-120,
    1 / 3, 2 / 3,
    0.0999, 0.1, 9999.0, 10000.0, 0.99999, 7.18, 0.4386, 1.35, 0.996, 0.9999, 1.004, math.inf,
    math.nan,
]  # fmt: skip
UNITS = ["N·m/A", "Ω", "H", "kg·m²", "kg", "s", "m", "W", "rad/s", "°C", "1", ""]


def test_the_page_spells_numbers_and_names_as_the_program_does(search_html: Path) -> None:
    drawn = random.Random(3)
    numbers = NUMBERS + [drawn.uniform(-10, 10) * 10.0 ** drawn.randint(-9, 9) for _ in range(400)]
    numbers += [drawn.randint(1, 99999) / 2 ** drawn.randint(0, 6) for _ in range(400)]  # ties
    keys = list(quantities())
    with opened(search_html) as page:
        told = [None if math.isnan(x) else x for x in numbers if x != math.inf]
        got = page.evaluate(
            """([numbers, units, keys]) => {
                const all = [...numbers.map(x => x === null ? NaN : x), Infinity];
                return {
                    number: all.map(x => [1, 2, 3, 4, 7].map(d => written.number(x, d))),
                    percent: all.map(x => [0, 1].flatMap(d => [false, true].map(s =>
                        written.percent(x, d, s)))),
                    quantity: all.map(x => units.map(u => written.quantity(x, u))),
                    departure: all.filter(x => x > 0 && x < Infinity).map(written.departure),
                    words: keys.map(written.words),
                };
            }""",
            [told, UNITS, keys],
        )
    all_numbers = [math.nan if x is None else x for x in told] + [math.inf]
    assert got["number"] == [[w.number(x, d) for d in (1, 2, 3, 4, 7)] for x in all_numbers]
    assert got["percent"] == [
        [w.percent(x, d, signed=s) for d in (0, 1) for s in (False, True)] for x in all_numbers
    ]
    assert got["quantity"] == [[w.quantity(x, u) for u in UNITS] for x in all_numbers]
    assert got["departure"] == [w.departure(x) for x in all_numbers if 0 < x < math.inf]
    assert got["words"] == [w.in_words(key) for key in keys]
    assert w.in_words("no_load_speed") in got["words"]


def test_no_report_has_a_number_format_of_its_own() -> None:
    own = re.compile(
        r"\{[^{}]*:[-+,.]*\d*[.]?\d*[gGeEfFn%]\}|\.toFixed|\.toExponential|toLocaleString"
    )
    report = Path(__file__).parents[2] / "catalog" / "report"
    for path in [*report.rglob("*.py"), *report.glob("page/assets/*.js")]:
        if path.name != "written.js":
            assert not own.search(path.read_text(encoding="utf-8")), path.name
