"""motorfolio plot: pictures of a motor or of a search, as SVG or PNG."""

from pathlib import Path
from typing import TYPE_CHECKING, Any

import click

from .common import catalog_option, say
from .requirement_options import requirement_of, requirement_options, says_the_load

if TYPE_CHECKING:
    from matplotlib.figure import Figure

_output = click.option(
    "--output", "-o", type=click.Path(path_type=Path, dir_okay=False), required=True,
    metavar="FILE", help="Where to write it; the name ends in .svg or .png.",
)  # fmt: skip


@click.group()
def command() -> None:
    """Draw a picture as SVG or PNG (needs matplotlib: pip install 'motorfolio[plot]')."""


@requirement_options
@command.command(
    epilog='Example: motorfolio plot plane EX-24-100 --supply "24 V" -o plane.svg draws what its '
    "shaft can give; with --torque and --speed, or --requirement FILE, what is asked of it, too."
)
@click.argument("part")
@_output
@catalog_option
def plane(part: str, output: Path, catalog: Path, **options: Any) -> None:
    """A motor's torque–speed plane: continuous, peak and voltage limits, and a requirement's
    cycle in it. Without --supply, at the motor's nominal voltage."""
    from ..report.pictures.make import plane_of
    from ..store import Catalog

    with Catalog.open(catalog) as opened, opened.at_once():
        load = says_the_load(options)
        if options["supply"] is None and not load:
            nominal = opened.motor(part)["figures"].get("nominal_voltage")
            if nominal is not None:
                options["supply"] = f"{nominal['value']!r} V"
        requirement = requirement_of(options, load=load)
        _write(plane_of(opened, part, requirement, cycle=load), output)


@requirement_options
@command.command(
    epilog='Example: motorfolio plot candidates --torque "0.1 N·m" --speed "3000 rpm" '
    '--supply "24 V" -o candidates.png'
)
@_output
@catalog_option
def candidates(output: Path, catalog: Path, **options: Any) -> None:
    """All motors of a search: size against the utilisation of the limiting limit."""
    from ..report.pictures.make import candidates_of
    from ..store import Catalog

    with Catalog.open(catalog) as opened, opened.at_once():
        _write(candidates_of(opened, requirement_of(options)), output)


@requirement_options
@command.command(
    epilog="Example: motorfolio plot ratios EX-24-100 --requirement lift.toml --ratio 3..20 "
    "-o ratios.svg"
)
@click.argument("part")
@_output
@catalog_option
def ratios(part: str, output: Path, catalog: Path, **options: Any) -> None:
    """A motor's utilisations against the gear ratio, and the ratios that do."""
    from ..report.pictures.make import ratios_of
    from ..store import Catalog

    with Catalog.open(catalog) as opened, opened.at_once():
        _write(ratios_of(opened, part, requirement_of(options)), output)


@command.command(epilog="Example: motorfolio plot figures EX-24-100 -o figures.svg")
@click.argument("part")
@_output
@catalog_option
def figures(part: str, output: Path, catalog: Path) -> None:
    """A motor's printed figures against what its other figures imply, so that an outlier is
    seen."""
    from ..report.pictures.make import figures_of
    from ..store import Catalog

    with Catalog.open(catalog) as opened, opened.at_once():
        _write(figures_of(opened, part), output)


def _write(figure: "Figure", output: Path) -> None:
    from ..report.pictures.style import save
    from ..report.safety import SAFETY

    save(figure, output)
    say(f"Drawn: {output}")
    say(SAFETY)
