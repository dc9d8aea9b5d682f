"""``twolight bring-in``, ``prescription`` and ``schema``: formats read, written and described."""

from pathlib import Path
from typing import TYPE_CHECKING

import click

from advisor.commands.common import write_file

if TYPE_CHECKING:
    from advisor.counsel.schemas import SchemaName


@click.command("bring-in")
@click.argument("file", type=click.Path(path_type=Path))
@click.option("-o", "--out", required=True, type=click.Path(path_type=Path), help="VISIT.json to write.")
@click.option("--into", type=click.Path(path_type=Path), help="Visit file that a frame record is put into.")
@click.option("--entry", type=click.IntRange(1), default=1, show_default=True, help="Which of several prescriptions.")
@click.option("--mirror", is_flag=True, help="Exchange nasal and temporal in a traced outline.")
def bring_in(file: Path, out: Path, into: Path | None, entry: int, mirror: bool) -> None:
    """Make a visit file of a FHIR prescription, or put a frame record into one; says what was not read."""
    from advisor.counsel.visit import read_visit, visit_to_json
    from advisor.web.brought_files import brought_visit
    from advisor.web.language import language

    english = language("en")
    visit, notes = brought_visit(
        file, into=None if into is None else read_visit(into), entry=entry, mirror=mirror, speaker=english
    )  # fmt: skip
    write_file(out, visit_to_json(visit).encode())
    for note in notes:
        click.echo(note, err=True)
    click.echo(f"{out}")


@click.command()
@click.argument("file", type=click.Path(path_type=Path))
@click.option("-o", "--out", required=True, type=click.Path(path_type=Path), help="OUT.json to write.")
@click.option("--name", "with_name", is_flag=True, help="Put the wearer's name in.")
def prescription(file: Path, out: Path, with_name: bool) -> None:
    """Write the prescription of a visit file as HL7 FHIR; says what the format has no place for."""
    import datetime as dt

    from advisor.counsel.fhir_writing import to_fhir
    from advisor.counsel.visit import read_visit
    from advisor.web.brought import said
    from advisor.web.language import language

    written = to_fhir(read_visit(file), created=dt.date.today(), with_name=with_name)
    write_file(out, written.text().encode())
    for note in said(written.notes, language("en")):
        click.echo(note, err=True)
    click.echo(f"{out}")


@click.command()
@click.argument("which", type=click.Choice(["visit", "range", "comparison"]), default="visit")
def schema(which: "SchemaName") -> None:
    """Print the JSON Schema of a format."""
    from advisor.counsel.schemas import schema_text

    click.echo(schema_text(which), nl=False)
