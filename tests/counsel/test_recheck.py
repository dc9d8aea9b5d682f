"""Return visits as data: ``recheck_cases.toml`` was written before the code, each case with its reason."""

import datetime as dt
import json
import tomllib
from pathlib import Path
from typing import Any

import pytest

from advisor.counsel.measured import check_measured
from advisor.counsel.recheck import recheck
from advisor.counsel.recheck_answer import RecheckAnswer
from advisor.counsel.recheck_texts import SIGNS
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import check_visit, read_visit, visit_to_json
from advisor.resources import resource_dir
from advisor.web.language import language

CASES: list[dict[str, Any]] = tomllib.loads((Path(__file__).parent / "recheck_cases.toml").read_text(encoding="utf-8"))[
    "case"
]
TODAY = dt.date(2026, 12, 20)


def answer_of(case: dict[str, Any]) -> RecheckAnswer:
    path = resource_dir("demo_patients") / f"{case['demo']}.json"
    content = json.loads(visit_to_json(read_visit(path))) | case.get("change", {})
    answers = dict.fromkeys(SIGNS, "no") if case.get("signs") == "no" else {}
    return recheck(
        check_visit(content),
        builtin_range(),
        says=case["says"],
        tests=answers | case.get("answers", {}),
        measured=check_measured(case["measured"]) if "measured" in case else None,
        translator=language("en"),
        today=TODAY,
    )


@pytest.mark.parametrize("case", CASES, ids=lambda case: case["name"])
def test_a_return_visit_ends_as_a_good_dispenser_would_end_it(case: dict[str, Any]) -> None:
    answer, expect = answer_of(case), case["expect"]
    causes = {cause.key: cause for cause in answer.causes}
    remedies = {cause.key: {r.key: r for r in cause.remedies} for cause in answer.causes}
    assert (answer.refer or "none") == expect["refer"]
    if "offer" in expect:
        assert answer.offer == expect["offer"]
    if "first" in expect:
        assert answer.causes[0].key == expect["first"], [(c.key, c.level, c.told) for c in answer.causes]
    assert not set(causes) & set(expect.get("absent", ()))
    assert set(expect.get("ruled_out", ())) <= {cause.key for cause in answer.ruled_out}
    for wanted in expect.get("remedies", ()):
        assert wanted["key"] in remedies[wanted["cause"]], remedies
        if "figure" in wanted:
            found = {part.figure: part for part in remedies[wanted["cause"]][wanted["key"]].figures}[wanted["figure"]]
            assert found.after < found.before if wanted["direction"] == "down" else found.after > found.before
    assert not {key for of in remedies.values() for key in of} & set(expect.get("never", ()))
    assert set(expect.get("notes", ())) <= {note.code for note in answer.notes}
