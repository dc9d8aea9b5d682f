"""``twolight recheck`` and the bench slip from the command line."""

import json
from pathlib import Path

import pytest
from click.testing import CliRunner, Result

from advisor.cli import main
from advisor.counsel.recheck_answer import RecheckAnswer
from advisor.counsel.recheck_texts import SIGNS
from advisor.resources import resource_dir

DEMO = resource_dir("demo_patients")
WEAK, CYLINDER = DEMO / "weak-minus-night-driver.json", DEMO / "strong-cylinder.json"
NO_SIGNS = [part for key in SIGNS for part in ("--answer", f"{key}=no")]


@pytest.fixture(autouse=True)
def no_records_of_this_machine(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("TWOLIGHT_DATA", str(tmp_path / "records"))


def run(*arguments: object, status: int = 0) -> Result:
    result = CliRunner().invoke(main, [str(argument) for argument in arguments])
    assert result.exception is None or isinstance(result.exception, SystemExit), repr(result.exception)
    assert result.exit_code == status, result.output
    return result


def test_signs_stand_before_tests_and_tests_before_causes() -> None:
    text = run("recheck", WEAK, "--says", "second light", "--option", 1).output
    signs, tests, cause = (
        text.index(words) for words in ("Signs for an eye doctor", "Quick tests", "1. Light mirrored")
    )
    assert signs < tests < cause
    assert "No lens is offered until every sign is answered" in text
    assert "visibility level: " in text


def test_an_answer_by_json_reads_back_by_its_model() -> None:
    output = run(
        "recheck", WEAK, "--says", "second light", "--option", 1, "--json", *NO_SIGNS, "--answer", "cover-eye=no"
    ).output
    answer = RecheckAnswer.model_validate_json(output)
    assert (answer.format, answer.offer, answer.option) == ("twolight-recheck-1", "open", 0)
    assert {sign.answer for sign in answer.signs} == {"no"}


def test_an_answered_sign_ends_it() -> None:
    text = run("recheck", WEAK, "--says", "second light", "--answer", "today-double=yes").output
    assert "To an eye doctor today." in text
    assert "remake" not in text


def test_measurements_come_from_a_file(tmp_path: Path) -> None:
    measured = tmp_path / "measured.json"
    measured.write_text(json.dumps({"right": {"sphere": -1.25, "cylinder": -4.25, "axis": 43}}), encoding="utf-8")
    text = run("recheck", CYLINDER, "--says", "floor slopes", "--measured", measured, *NO_SIGNS).output
    assert "Remake as ordered; no other lens until these are right." in text
    assert "axis off: 8.0° → at most 2.0°" in text


@pytest.mark.parametrize(
    ("content", "words"),
    [('{"right": {"cylinder": -1}}', "needs an axis"), ('{"wrong": 1}', "not known here"), ("[", "not JSON")],
)
def test_a_file_of_measurements_that_cannot_be_read_is_told_in_a_line(tmp_path: Path, content: str, words: str) -> None:
    measured = tmp_path / "measured.json"
    measured.write_text(content, encoding="utf-8")
    result = run("recheck", CYLINDER, "--says", "floor slopes", "--measured", measured, status=1)
    assert words in result.output
    assert str(measured) in result.output


def test_words_nobody_knows_are_told_with_the_signs() -> None:
    text = run("recheck", WEAK, "--says", "lorem").output
    assert text.index("Signs for an eye doctor") < text.index("No complaint is understood")
    assert "a second light, double headlights" in text
    assert "today-loss" in text


def test_what_helps_for_nothing_is_not_headed_by_no_lens() -> None:
    text = run("recheck", WEAK, "--says", "they slide down", *NO_SIGNS).output
    assert "No other lens is called for: what helps stands below." in text
    assert "No lens is offered" not in text
    assert "Measure now" not in text


def test_a_sign_is_told_even_where_the_option_cannot_be_worked_out() -> None:
    text = run("recheck", WEAK, "--says", "I see flashes", "--option", 9).output
    assert "To an eye doctor today." in text


def test_answers_nobody_knows_are_told(tmp_path: Path) -> None:
    assert "cover-eye" in run("recheck", WEAK, "--says", "glare", "--answer", "cover-eyes=yes", status=1).output
    assert "KEY=yes" in run("recheck", WEAK, "--says", "glare", "--answer", "cover-eye", status=2).output
    assert "no such file" in run("recheck", tmp_path / "gone.json", "--says", "glare", status=1).output
    assert "There is no option 9" in run("recheck", WEAK, "--says", "glare", "--option", 9, status=1).output


def test_the_bench_slip_is_the_orders_other_side(tmp_path: Path) -> None:
    out = tmp_path / "bench.html"
    run("order", CYLINDER, "-o", out, "--bench")
    text = out.read_text(encoding="utf-8")
    assert "Bench slip" in text
    assert "grip pad" in text
    bare = tmp_path / "visit.json"
    bare.write_text(json.dumps({"prescription": {"right": {"sphere": -1}, "left": {"sphere": -1}}}), encoding="utf-8")
    assert "Not ready to order" in run("order", bare, "-o", out, "--bench", status=1).output
