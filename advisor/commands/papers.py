"""``twolight sheet`` and ``twolight order``: the papers of visit files."""

from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING

import click

from advisor.commands.common import (
    Sentence,
    bar,
    logo_of,
    stock_of,
    write_file,
)

if TYPE_CHECKING:
    from advisor.counsel.stock import Range
    from advisor.counsel.visit import Visit
    from advisor.web.sheet_page import Print


@click.command()
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

    logo = logo_of(data, range_file)

    def make(visit: "Visit", stock: "Range") -> str:
        if care_only:
            return care_sheet(visit, stock, code=code, print_size=print_size, logo=logo)
        return wearer_sheet(visit, stock, number=number, code=code, print_size=print_size, logo=logo)

    into_one = out.suffix.lower() in (".pdf", ".html") or not out.is_dir()
    if len(files) == 1 and not files[0].is_dir() and into_one:
        write_paper(data, files[0], out, range_file, make, logo=logo)
    else:
        _sheets(files, out, stock_of(data, range_file), make, logo=logo)


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
        raise Sentence(f"{out} cannot be made: {error.strerror}.") from error
    files, made = files_in(given), 0
    for sheet in sheet_files(bar(files), stock, make, logo=logo):
        if sheet.content is None:
            click.echo(sheet.problem, err=True)
        else:
            write_file(out / sheet.name, sheet.content)
            made += 1
    click.echo(f"{made} of {len(files)} sheets written to {out}.")
    if made < len(files) or not files:
        raise click.exceptions.Exit(1)


@click.command()
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
    write_paper(data, file, out, range_file, lambda visit, stock: slip(visit, stock, number=number))


def write_paper(
    data: Path | None,
    file: Path,
    out: Path,
    range_file: Path | None,
    make: Callable[["Visit", "Range"], str],
    *,
    logo: bytes | None = None,
) -> None:
    """Write one paper of one visit file as PDF or HTML, by the ending of the file to write."""
    from advisor.counsel.visit import read_visit

    if out.suffix.lower() not in (".pdf", ".html"):
        raise click.UsageError("The file to write ends in .pdf or .html.")
    html = make(read_visit(file), stock_of(data, range_file))
    if out.suffix.lower() == ".html":
        from advisor.web.documents import standing_alone

        write_file(out, standing_alone(html, logo=logo).encode())
    else:
        from advisor.web.pdf import write_pdf

        write_file(out, write_pdf(html, logo=logo))
    click.echo(f"{out}")
