"""The ``twolight`` command: check what was typed, call the domain, print. Imports wait until they are needed."""

import json
import os
import sys
from collections.abc import Callable, Iterable, Iterator
from contextlib import suppress
from pathlib import Path
from typing import TYPE_CHECKING, Any

import click

from advisor import __version__
from advisor.errors import TwolightError

if TYPE_CHECKING:
    from advisor.counsel.comparison import Comparison
    from advisor.counsel.schemas import SchemaName
    from advisor.counsel.stock import Range
    from advisor.counsel.visit import Visit
    from advisor.web.sheet_page import Print

MANY_FILES = 5  # from here on a progress bar is shown
DATABASE = "advisor.cli.database"  # where a command finds what was given before it


class _Sentence(click.ClickException):
    """A problem told in its own words, without a traceback."""

    def show(self, file: Any = None) -> None:  # noqa: ARG002  # click's signature
        click.echo(self.format_message(), err=True)


class _Group(click.Group):
    """Turns every error that has a sentence of its own into that sentence and exit status 1."""

    def invoke(self, ctx: click.Context) -> Any:
        try:
            return super().invoke(ctx)
        except TwolightError as error:
            raise _Sentence(str(error)) from error


@click.group(cls=_Group, invoke_without_command=True, context_settings={"help_option_names": ["-h", "--help"]})
@click.option("--data", type=click.Path(path_type=Path, file_okay=False), help="Folder of visits and the shop's range.")
@click.option("--database", envvar="TWOLIGHT_DATABASE", metavar="URL", help="PostgreSQL database of several branches.")
@click.option("--port", type=click.IntRange(1, 65535), default=8642, show_default=True, help="Port to serve on.")
@click.option("--no-browser", is_flag=True, help="Do not open the browser.")
@click.version_option(__version__, prog_name="twolight")
@click.pass_context
def main(ctx: click.Context, data: Path | None, database: str | None, port: int, no_browser: bool) -> None:
    """Which lens, which coating, which ghost image: worked out for one wearer.

    Without a command, serve the pages and open the browser.
    """
    ctx.obj = data
    ctx.meta[DATABASE] = (database or "").strip() or None
    if ctx.invoked_subcommand is None:
        _serve(data, port=port, open_browser=not no_browser)


def _database() -> str | None:
    """Return the address of the database given, or named in the environment, whatever the command."""
    given: str | None = click.get_current_context().meta[DATABASE]
    return given


def _records(data: Path | None) -> Path | str:
    """Return where the records lie: at the address of a database, else in the data folder."""
    from advisor.records.location import data_folder

    given = _database()
    if given is None:
        return data_folder(data)
    from advisor.records.server import address_of

    address_of(given)  # anything else would be taken for a folder
    return given


def _serve(data: Path | None, *, port: int, open_browser: bool) -> None:
    from advisor.records.location import data_folder
    from advisor.web.app import create_app
    from advisor.web.server import run

    app = create_app(data_dir=data_folder(data), database=_database())
    sys.exit(run(app, port=port, open_browser=open_browser))


def _stock(data: Path | None, file: Path | None = None) -> "Range":
    """Return the range of a file, else the shop's own, else the built-in one."""
    from advisor.counsel.stock import builtin_range, parse_range, read_range

    if file is not None:
        return read_range(file)
    from advisor.records.location import database_file

    place = _records(data)
    if isinstance(place, Path) and not database_file(place).exists():
        return builtin_range()
    from advisor.records.store import Store

    with Store.open(place) as store:
        current = store.current_range()
    return builtin_range() if current is None else parse_range(current.toml)


def _logo(data: Path | None, file: Path | None) -> bytes | None:
    """Return the shop's logo from the records; a range file given alone is of no shop here."""
    from advisor.records.location import database_file

    place = _records(data)
    if (file is not None and data is None) or (isinstance(place, Path) and not database_file(place).exists()):
        return None
    from advisor.records.store import Store

    with Store.open(place) as store:
        return store.get_logo()


def _bar(files: list[Path]) -> Iterable[Path]:
    """Yield the files, with a progress bar on the error stream if there are many and somebody watches."""
    if len(files) < MANY_FILES or not sys.stderr.isatty():
        return files
    from tqdm import tqdm

    return tqdm(files, unit="visit", file=sys.stderr)


def _each(files: Iterable[Path], stock: "Range", *, with_advice: bool) -> Iterator[tuple[Path, "Visit", "Comparison"]]:
    """Yield each readable visit with its comparison; report the others and end with status 1 if there were any."""
    from advisor.counsel.compare import compare
    from advisor.counsel.faults import Faults
    from advisor.counsel.visit import read_visit
    from advisor.web.language import language

    failed = 0
    for file in files:
        try:
            visit = read_visit(file)
            answer = compare(visit, stock, translator=language("en"), with_advice=with_advice, file=str(file))
        except TwolightError as error:
            failed += 1
            click.echo(str(error) if isinstance(error, Faults) else f"{file}: {error}", err=True)
        else:
            yield file, visit, answer
    if failed:
        raise click.exceptions.Exit(1)


@main.command()
@click.argument("files", nargs=-1, required=True, type=click.Path(path_type=Path))
@click.option("--json", "as_json", is_flag=True, help="One JSON object a line.")
@click.option("--csv", "as_csv", is_flag=True, help="One row a figure.")
@click.option("--range", "range_file", type=click.Path(path_type=Path), help="Range file to use.")
@click.option("--no-advice", is_flag=True, help="Leave the advice out.")
@click.pass_obj
def compare(
    data: Path | None, files: tuple[Path, ...], as_json: bool, as_csv: bool, range_file: Path | None, no_advice: bool
) -> None:
    """Compare the options of each visit file."""
    if as_json and as_csv:
        raise click.UsageError("Choose one of --json and --csv.")
    stock = _stock(data, range_file)
    write = _as_json if as_json else _as_csv() if as_csv else _as_table
    for file, visit, answer in _each(_bar(list(files)), stock, with_advice=not no_advice):
        click.echo(write(file, visit, answer, stock), nl=False)


def _as_json(_file: Path, _visit: "Visit", answer: "Comparison", _stock: "Range") -> str:
    return answer.model_dump_json(exclude_unset=True) + "\n"


def _as_csv() -> Callable[[Path, "Visit", "Comparison", "Range"], str]:
    from advisor.web.table import csv_rows, csv_text

    head = [True]

    def write(file: Path, _visit: "Visit", answer: "Comparison", _stock: "Range") -> str:
        text = csv_text(csv_rows(answer, file=str(file)), head=head[0])
        head[0] = False
        return text

    return write


def _as_table(file: Path, visit: "Visit", answer: "Comparison", stock: "Range") -> str:
    from advisor.web.language import language
    from advisor.web.table import text_table

    name = visit.wearer.name if visit.wearer and visit.wearer.name else file.name
    return text_table(answer, title=name, currency=stock.currency, language=language("en")) + "\n"


def _write(out: Path, content: bytes) -> None:
    """Write a file whole or not at all."""
    part = out.parent / f".{out.name}.{os.getpid()}.part"
    try:
        part.write_bytes(content)
        part.replace(out)
    except OSError as error:
        with suppress(OSError):
            part.unlink(missing_ok=True)
        raise _Sentence(f"{out} cannot be written: {error.strerror}.") from error


@main.command()
@click.argument("files", nargs=-1, required=True, type=click.Path(path_type=Path))
@click.option("-o", "--out", required=True, type=click.Path(path_type=Path), help="OUT.pdf, OUT.html or a folder.")
@click.option("--option", "number", type=click.IntRange(1), help="Which option, counted from 1.")
@click.option("--language", "code", help="Language of the sheet; the wearer's own if left out.")
@click.option("--print", "print_size", type=click.Choice(["standard", "large"]), help="The wearer's own if left out.")
@click.option("--care-only", is_flag=True, help="The page about care alone.")
@click.option("--range", "range_file", type=click.Path(path_type=Path), help="Range file to use.")
@click.pass_obj
def sheet(
    data: Path | None,
    files: tuple[Path, ...],
    out: Path,
    number: int | None,
    code: str | None,
    print_size: "Print | None",
    care_only: bool,
    range_file: Path | None,
) -> None:
    """Write the wearer's sheet for a visit file; of several files, or of a folder of them, into a folder."""
    from advisor.web.sheet_page import care_sheet, wearer_sheet

    logo = _logo(data, range_file)

    def make(visit: "Visit", stock: "Range") -> str:
        if care_only:
            return care_sheet(visit, stock, code=code, print_size=print_size, logo=logo)
        return wearer_sheet(visit, stock, number=number, code=code, print_size=print_size, logo=logo)

    into_one = out.suffix.lower() in (".pdf", ".html") or not out.is_dir()
    if len(files) == 1 and not files[0].is_dir() and into_one:
        _paper(data, files[0], out, range_file, make, logo=logo)
    else:
        _sheets(files, out, _stock(data, range_file), make, logo=logo)


def _sheets(
    given: tuple[Path, ...],
    out: Path,
    stock: "Range",
    make: Callable[["Visit", "Range"], str],
    *,
    logo: bytes | None,
) -> None:
    """Write many sheets into a folder and say how many; status 1 if there were none or any was bad."""
    from advisor.web.sheet_files import files_in, sheet_files

    if out.suffix.lower() in (".pdf", ".html") and not out.is_dir():
        raise click.UsageError("Several sheets go into a folder: give one with -o.")
    try:
        out.mkdir(parents=True, exist_ok=True)
    except OSError as error:
        raise _Sentence(f"{out} cannot be made: {error.strerror}.") from error
    files, made = files_in(given), 0
    for sheet in sheet_files(_bar(files), stock, make, logo=logo):
        if sheet.content is None:
            click.echo(sheet.problem, err=True)
        else:
            _write(out / sheet.name, sheet.content)
            made += 1
    click.echo(f"{made} of {len(files)} sheets written to {out}.")
    if made < len(files) or not files:
        raise click.exceptions.Exit(1)


@main.command()
@click.argument("file", type=click.Path(path_type=Path))
@click.option("-o", "--out", required=True, type=click.Path(path_type=Path), help="OUT.pdf or OUT.html")
@click.option("--option", "number", type=click.IntRange(1), help="Which option, counted from 1.")
@click.option("--bench", is_flag=True, help="The workshop's bench slip instead of the supplier's slip.")
@click.option("--range", "range_file", type=click.Path(path_type=Path), help="Range file to use.")
@click.pass_obj
def order(data: Path | None, file: Path, out: Path, number: int | None, bench: bool, range_file: Path | None) -> None:
    """Write the order slip for a visit file; refused, with reasons, while something needed is missing."""
    from advisor.web.documents import bench_slip, order_slip

    slip = bench_slip if bench else order_slip
    _paper(data, file, out, range_file, lambda visit, stock: slip(visit, stock, number=number))


def _paper(
    data: Path | None,
    file: Path,
    out: Path,
    range_file: Path | None,
    make: Callable[["Visit", "Range"], str],
    *,
    logo: bytes | None = None,
) -> None:
    from advisor.counsel.visit import read_visit

    if out.suffix.lower() not in (".pdf", ".html"):
        raise click.UsageError("The file to write ends in .pdf or .html.")
    html = make(read_visit(file), _stock(data, range_file))
    if out.suffix.lower() == ".html":
        from advisor.web.documents import standing_alone

        _write(out, standing_alone(html, logo=logo).encode())
    else:
        from advisor.web.pdf import write_pdf

        _write(out, write_pdf(html, logo=logo))
    click.echo(f"{out}")


def _answers(_context: click.Context, _parameter: click.Parameter, given: tuple[str, ...]) -> dict[str, str]:
    """Read ``KEY=yes`` and ``KEY=no``."""
    pairs = [text.partition("=") for text in given]
    if any(value not in ("yes", "no") for _, _, value in pairs):
        raise click.BadParameter("write KEY=yes or KEY=no.")
    return {key.strip(): value for key, _, value in pairs}


@main.command()
@click.argument("file", type=click.Path(path_type=Path))
@click.option("--says", required=True, help="The wearer's words, such as “second light”.")
@click.option(
    "--answer", "answers", multiple=True, callback=_answers, help="KEY=yes or KEY=no: a sign or a quick test."
)
@click.option("--measured", "measured_file", type=click.Path(path_type=Path), help="JSON file of what was measured.")
@click.option("--option", "number", type=click.IntRange(1), help="Which option, counted from 1.")
@click.option("--json", "as_json", is_flag=True, help="One JSON object.")
@click.option("--range", "range_file", type=click.Path(path_type=Path), help="Range file to use.")
@click.pass_obj
def recheck(
    data: Path | None,
    file: Path,
    says: str,
    answers: dict[str, str],
    measured_file: Path | None,
    number: int | None,
    as_json: bool,
    range_file: Path | None,
) -> None:
    """Work out a return visit: signs for an eye doctor, as made, causes, and what each remedy would change."""
    from advisor.counsel.measured import read_measured
    from advisor.counsel.recheck import recheck as work_out
    from advisor.counsel.visit import read_visit
    from advisor.web.language import language
    from advisor.web.recheck_text import recheck_text

    visit, stock, english = read_visit(file), _stock(data, range_file), language("en")
    measured = None if measured_file is None else read_measured(measured_file)
    answer = work_out(
        visit, stock, says=says, tests=answers, measured=measured, number=number, translator=english
    )  # fmt: skip
    if as_json:
        click.echo(answer.model_dump_json())
        return
    name = visit.wearer.name if visit.wearer and visit.wearer.name else file.name
    click.echo(
        recheck_text(answer, title=name, currency=stock.currency, language=english), nl=False
    )  # fmt: skip


@main.command("bring-in")
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
    _write(out, visit_to_json(visit).encode())
    for note in notes:
        click.echo(note, err=True)
    click.echo(f"{out}")


@main.command()
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
    _write(out, written.text().encode())
    for note in said(written.notes, language("en")):
        click.echo(note, err=True)
    click.echo(f"{out}")


@main.command()
@click.argument("which", type=click.Choice(["visit", "range", "comparison"]), default="visit")
def schema(which: "SchemaName") -> None:
    """Print the JSON Schema of a format."""
    from advisor.counsel.schemas import schema_text

    click.echo(schema_text(which), nl=False)


@main.group("range", cls=_Group)
def range_() -> None:
    """Export or import what the shop sells."""


@range_.command("export")
@click.argument("file", type=click.Path(path_type=Path))
@click.pass_obj
def range_export(data: Path | None, file: Path) -> None:
    """Write the shop's range as one TOML file."""
    from advisor.counsel.stock import range_to_toml

    _write(file, range_to_toml(_stock(data)).encode())
    click.echo(f"{file}")


@range_.command("import")
@click.argument("file", type=click.Path(path_type=Path))
@click.pass_obj
def range_import(data: Path | None, file: Path) -> None:
    """Take a TOML file as the shop's range."""
    from advisor.counsel.stock import range_to_toml, read_range
    from advisor.records.store import Store

    stock = read_range(file)
    with Store.open(_records(data)) as store:
        store.set_range(range_to_toml(stock))
    click.echo(f"{file}: {len(stock.material)} materials, {len(stock.coating)} coatings, {len(stock.offer)} offers.")


@main.command()
@click.argument("file", type=click.Path(path_type=Path))
@click.option("--replace", is_flag=True, help="Write over a file of that name.")
@click.pass_obj
def backup(data: Path | None, file: Path, replace: bool) -> None:
    """Write everything in the records into one file, also while the program runs."""
    from advisor.records.location import database_file
    from advisor.records.store import Store

    place = _records(data)
    if isinstance(place, Path) and not database_file(place).exists():
        raise _Sentence(f"There are no records in {place}; nothing was written.")
    with Store.open(place) as store:
        done = store.backup(file, replace=replace)
        store.record_event("backup")
    click.echo(f"{done.file}: {_visits(done.visits)}, {done.size_bytes / 1e6:.1f} MB, read again and found whole.")


@main.command()
@click.argument("file", type=click.Path(path_type=Path))
@click.pass_obj
def restore(data: Path | None, file: Path) -> None:
    """Put a backup in the place of the records; what was there is kept beside it. Stop the program first."""
    from advisor.records.location import data_folder
    from advisor.records.restore import restore as put_back
    from advisor.records.store import Store

    done = put_back(_records(data), file, folder=data_folder(data))
    with Store.open(_records(data)) as store:
        store.record_event("restored")
    kept = f"What was there before is kept in {done.kept}." if done.kept else "Nothing was there before."
    click.echo(f"{file}: {_visits(done.visits)} put into {done.place}. {kept}")


def _visits(count: int) -> str:
    return "1 visit" if count == 1 else f"{count} visits"


@main.command()
@click.option("--no-serve", is_flag=True, help="Write the sheets and stop.")
@click.option(
    "--out", type=click.Path(path_type=Path, file_okay=False), default=Path("twolight-demo"), show_default=True
)
@click.pass_context
def demo(ctx: click.Context, no_serve: bool, out: Path) -> None:
    """Do the whole job for the demo wearers: compare, write their sheets, say where, serve."""
    from advisor.counsel.stock import builtin_range
    from advisor.resources import resource_dir
    from advisor.web.documents import standing_alone
    from advisor.web.pdf import is_available, write_pdf
    from advisor.web.sheet_page import wearer_sheet

    try:
        out.mkdir(parents=True, exist_ok=True)
    except OSError as error:
        raise _Sentence(f"{out} cannot be made: {error.strerror}.") from error
    files = sorted(resource_dir("demo_patients").glob("*.json"))
    stock, paper = builtin_range(), is_available()
    for file, visit, answer in _each(files, stock, with_advice=True):
        click.echo(_as_table(file, visit, answer, stock))
        html = wearer_sheet(visit, stock)
        if paper:
            _write(out / f"{file.stem}.pdf", write_pdf(html))
        else:
            _write(out / f"{file.stem}.html", standing_alone(html).encode())
        _write(out / f"{file.stem}.json", json.dumps(answer.model_dump(mode="json", exclude_unset=True)).encode())
    kind = "PDF" if paper else "HTML (no PDF here: the Pango libraries are missing, see the README)"
    click.echo(f"{len(files)} wearers compared; their sheets are in {out.resolve()} as {kind}.")
    if not no_serve:
        _serve(ctx.obj, port=8642, open_browser=True)
