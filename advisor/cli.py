"""The ``twolight`` command: its options, and the commands under it."""

from pathlib import Path

import click

from advisor import __version__
from advisor.commands.common import DATABASE, Group
from advisor.commands.compare import compare
from advisor.commands.demo import demo, serve
from advisor.commands.exchange import bring_in, prescription, schema
from advisor.commands.keeping import backup, range_, restore
from advisor.commands.papers import order, sheet
from advisor.commands.recheck import recheck


@click.group(cls=Group, invoke_without_command=True, context_settings={"help_option_names": ["-h", "--help"]})
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
        serve(data, port=port, open_browser=not no_browser)


for _command in (demo, compare, sheet, order, recheck, bring_in, prescription, schema, range_, backup, restore):
    main.add_command(_command)
