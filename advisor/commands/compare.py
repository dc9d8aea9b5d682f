"""``twolight compare``: the options of visit files as a table, as JSON or as CSV."""

from collections.abc import Callable, Iterable, Iterator
from pathlib import Path
from typing import TYPE_CHECKING

import click

from advisor.commands.common import (
    bar,
    stock_of,
)
from advisor.errors import TwolightError

if TYPE_CHECKING:
    from advisor.counsel.comparison import Comparison
    from advisor.counsel.stock import Range
    from advisor.counsel.visit import Visit


def each_answer(
    files: Iterable[Path], stock: "Range", *, with_advice: bool
) -> Iterator[tuple[Path, "Visit", "Comparison"]]:
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


@click.command()
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
    stock = stock_of(data, range_file)
    write = _as_json if as_json else _as_csv() if as_csv else as_table
    for file, visit, answer in each_answer(bar(list(files)), stock, with_advice=not no_advice):
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


def as_table(file: Path, visit: "Visit", answer: "Comparison", stock: "Range") -> str:
    """Return the comparison as a table for the terminal."""
    from advisor.web.language import language
    from advisor.web.table import text_table

    name = visit.wearer.name if visit.wearer and visit.wearer.name else file.name
    return text_table(answer, title=name, currency=stock.currency, language=language("en")) + "\n"
