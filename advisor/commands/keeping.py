"""``twolight range``, ``backup`` and ``restore``: what a shop keeps, handed out and taken in."""

from pathlib import Path
from typing import TYPE_CHECKING

import click

from advisor.commands.common import Group, Sentence, records, stock_of, write_file

if TYPE_CHECKING:
    pass


@click.group("range", cls=Group)
def range_() -> None:
    """Export or import what the shop sells."""


@range_.command("export")
@click.argument("file", type=click.Path(path_type=Path))
@click.pass_obj
def range_export(data: Path | None, file: Path) -> None:
    """Write the shop's range as one TOML file."""
    from advisor.counsel.stock import range_to_toml

    write_file(file, range_to_toml(stock_of(data)).encode())
    click.echo(f"{file}")


@range_.command("import")
@click.argument("file", type=click.Path(path_type=Path))
@click.pass_obj
def range_import(data: Path | None, file: Path) -> None:
    """Take a TOML file as the shop's range."""
    from advisor.counsel.stock import range_to_toml, read_range
    from advisor.records.store import Store

    stock = read_range(file)
    with Store.open(records(data)) as store:
        store.set_range(range_to_toml(stock))
    click.echo(f"{file}: {len(stock.material)} materials, {len(stock.coating)} coatings, {len(stock.offer)} offers.")


@click.command()
@click.argument("file", type=click.Path(path_type=Path))
@click.option("--replace", is_flag=True, help="Write over a file of that name.")
@click.pass_obj
def backup(data: Path | None, file: Path, replace: bool) -> None:
    """Write everything in the records into one file, also while the program runs."""
    from advisor.records.location import database_file
    from advisor.records.store import Store

    place = records(data)
    if isinstance(place, Path) and not database_file(place).exists():
        raise Sentence(f"There are no records in {place}; nothing was written.")
    with Store.open(place) as store:
        done = store.backup(file, replace=replace)
        store.record_event("backup")
    click.echo(f"{done.file}: {_visits(done.visits)}, {done.size_bytes / 1e6:.1f} MB, read again and found whole.")


@click.command()
@click.argument("file", type=click.Path(path_type=Path))
@click.pass_obj
def restore(data: Path | None, file: Path) -> None:
    """Put a backup in the place of the records; what was there is kept beside it. Stop the program first."""
    from advisor.records.location import data_folder
    from advisor.records.restore import restore as put_back
    from advisor.records.store import Store

    done = put_back(records(data), file, folder=data_folder(data))
    with Store.open(records(data)) as store:
        store.record_event("restored")
    kept = f"What was there before is kept in {done.kept}." if done.kept else "Nothing was there before."
    click.echo(f"{file}: {_visits(done.visits)} put into {done.place}. {kept}")


def _visits(count: int) -> str:
    return "1 visit" if count == 1 else f"{count} visits"
