"""motorfolio schema: the JSON Schema of a document."""

import click

from .common import print_json

NAMES = ("entry", "motor", "finding", "requirement")


@click.command(epilog="Example: motorfolio schema motor > motor.schema.json")
@click.argument("name", type=click.Choice(NAMES))
def command(name: str) -> int:
    """Print the JSON Schema (2020-12) of a document: an entry as import takes it, a motor as show
    --json prints it, a finding, or a requirement file.
    """
    if name == "requirement":
        from ..requirement.schema import json_schema as requirement_schema

        print_json(requirement_schema())
    else:
        from ...schema.entry import json_schema

        print_json(json_schema(name))
    return 0
