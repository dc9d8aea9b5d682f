"""``twolight recheck``: a return visit worked out from a visit file."""

from pathlib import Path
from typing import TYPE_CHECKING

import click

from advisor.commands.common import stock_of

if TYPE_CHECKING:
    pass


def _answers(_context: click.Context, _parameter: click.Parameter, given: tuple[str, ...]) -> dict[str, str]:
    """Read ``KEY=yes`` and ``KEY=no``."""
    pairs = [text.partition("=") for text in given]
    if any(value not in ("yes", "no") for _, _, value in pairs):
        raise click.BadParameter("write KEY=yes or KEY=no.")
    return {key.strip(): value for key, _, value in pairs}


@click.command()
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

    visit, stock, english = read_visit(file), stock_of(data, range_file), language("en")
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
