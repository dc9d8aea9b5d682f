"""``twolight demo``: the whole job for the demo wearers; and serving, which ``twolight`` alone does."""

import json
import sys
from pathlib import Path
from typing import TYPE_CHECKING

import click

from advisor.commands.common import Sentence, database_given, write_file
from advisor.commands.compare import as_table, each_answer

if TYPE_CHECKING:
    pass


def serve(data: Path | None, *, port: int, open_browser: bool) -> None:
    """Serve the pages until told to stop, and end with the server's exit status."""
    from advisor.records.location import data_folder
    from advisor.web.app import create_app
    from advisor.web.server import run

    app = create_app(data_dir=data_folder(data), database=database_given())
    sys.exit(run(app, port=port, open_browser=open_browser))


@click.command()
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
        raise Sentence(f"{out} cannot be made: {error.strerror}.") from error
    files = sorted(resource_dir("demo_patients").glob("*.json"))
    stock, paper = builtin_range(), is_available()
    for file, visit, answer in each_answer(files, stock, with_advice=True):
        click.echo(as_table(file, visit, answer, stock))
        html = wearer_sheet(visit, stock)
        if paper:
            write_file(out / f"{file.stem}.pdf", write_pdf(html))
        else:
            write_file(out / f"{file.stem}.html", standing_alone(html).encode())
        write_file(out / f"{file.stem}.json", json.dumps(answer.model_dump(mode="json", exclude_unset=True)).encode())
    kind = "PDF" if paper else "HTML (no PDF here: the Pango libraries are missing, see the README)"
    click.echo(f"{len(files)} wearers compared; their sheets are in {out.resolve()} as {kind}.")
    if not no_serve:
        serve(ctx.obj, port=8642, open_browser=True)
