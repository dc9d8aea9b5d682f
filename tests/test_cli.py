"""The command: what it prints, what it refuses, and that nobody ever sees a traceback."""

import copy
import csv
import io
import json
import random
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
from click.testing import CliRunner, Result
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from advisor import __version__
from advisor.cli import main
from advisor.counsel.comparison import Comparison
from advisor.counsel.schemas import schema_path
from advisor.counsel.stock import builtin_range, range_to_toml
from advisor.resources import resource_dir

DEMO = sorted(resource_dir("demo_patients").glob("*.json"))
WEAK = {"prescription": {"right": {"sphere": -1.0}, "left": {"sphere": -1.25}}, "scenes": []}


@pytest.fixture(autouse=True)
def no_records_of_this_machine(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("TWOLIGHT_DATA", str(tmp_path / "records"))


def run(*arguments: object, status: int = 0) -> Result:
    result = CliRunner().invoke(main, [str(argument) for argument in arguments])
    told = result.exception is None or isinstance(result.exception, SystemExit)
    assert told, repr(result.exception)
    assert result.exit_code == status, result.output
    assert "Traceback" not in result.output
    return result


def visit_file(folder: Path, content: Any, name: str = "visit.json") -> Path:
    path = folder / name
    path.write_text(content if isinstance(content, str) else json.dumps(content), encoding="utf-8")
    return path


# --- a real process --------------------------------------------------------------------------------------------------


def process(*arguments: object) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", "advisor", *map(str, arguments)],
        capture_output=True, text=True, encoding="utf-8", timeout=60, check=False,
    )  # fmt: skip


def test_a_process_compares_the_readable_files_in_order_and_ends_with_1_for_the_other(tmp_path: Path) -> None:
    broken = visit_file(tmp_path, "{", "broken.json")
    done = process("compare", DEMO[3], broken, DEMO[0], "--json")
    assert done.returncode == 1
    answers = [json.loads(line) for line in done.stdout.splitlines()]
    assert [answer["format"] for answer in answers] == ["twolight-comparison-1"] * 2
    written = [json.loads(path.read_text(encoding="utf-8"))["reference"] for path in (DEMO[3], DEMO[0])]
    assert [answer["reference"] for answer in answers] == written
    assert done.stderr == f"{broken}: this is not JSON: line 1, column 2.\n"


def test_a_process_ends_with_1_and_one_line_for_a_missing_file(tmp_path: Path) -> None:
    done = process("compare", tmp_path / "none.json")
    assert (done.returncode, done.stdout) == (1, "")
    assert done.stderr == f"{tmp_path / 'none.json'}: there is no such file.\n"


def test_a_process_ends_with_2_for_a_call_it_does_not_understand() -> None:
    assert process("compare").returncode == 2
    assert process("no-such-command").returncode == 2


# --- compare ---------------------------------------------------------------------------------------------------------


def test_the_table_shows_the_wearer_the_options_the_figures_and_the_cautions(tmp_path: Path) -> None:
    content = {**WEAK, "wearer": {"name": "Ada Probe"}, "options": [{"material": "hard-resin-150", "coating": "bare"}]}
    text = run("compare", visit_file(tmp_path, content)).stdout
    lines = text.splitlines()
    assert lines[0] == "Ada Probe"
    assert "1 Hard resin 1.50, Bare" in text
    (whole,) = (line for line in lines if line.startswith("whole lens mirrors"))
    assert whole.endswith(" 7.69 %")  # n_d 1.498 with V 58 and D65, by two other methods
    assert "Caution: An ordinary spectacle lens, coated or not, is not eye protection." in text
    (used,) = (line for line in lines if line.startswith("Defaults used: "))
    assert "wearer.birth_year" in used


def test_a_visit_without_a_name_is_titled_by_its_file(tmp_path: Path) -> None:
    assert run("compare", visit_file(tmp_path, WEAK, "a-1.json")).stdout.splitlines()[0] == "a-1.json"


def test_a_name_cannot_move_the_cursor_or_start_a_line_of_its_own(tmp_path: Path) -> None:
    content = {**WEAK, "wearer": {"name": "Eve\x1b[2J\nCaution: none"}}
    text = run("compare", visit_file(tmp_path, content)).stdout
    assert "\x1b" not in text
    assert "Caution: none" not in text.splitlines()
    assert text.splitlines()[0].startswith("Eve")


def test_each_json_line_is_an_answer_that_reads_back() -> None:
    lines = run("compare", *DEMO[:3], "--json").stdout.splitlines()
    assert len(lines) == 3
    for line in lines:
        assert Comparison.model_validate_json(line).model_dump_json(exclude_unset=True) == line


def test_no_advice_leaves_the_advice_out_of_both_forms(tmp_path: Path) -> None:
    file = visit_file(tmp_path, WEAK)
    assert "advice" in json.loads(run("compare", file, "--json").stdout)
    assert "advice" not in json.loads(run("compare", file, "--json", "--no-advice").stdout)
    assert "Caution" not in run("compare", file, "--no-advice").stdout


def test_csv_has_one_head_and_bare_numbers_for_all_files(tmp_path: Path) -> None:
    files = [visit_file(tmp_path, {**WEAK, "reference": name}, f"{name}.json") for name in ("a", "b")]
    rows = list(csv.DictReader(io.StringIO(run("compare", *files, "--csv").stdout)))
    assert {row["file"] for row in rows} == {str(file) for file in files}
    assert {row["eye"] for row in rows} == {"right", "left", "both"}
    values = [float(row["value"]) for row in rows]
    assert len(values) == len(rows) > 50
    bare = [row for row in rows if row["row"] == "whole_lens" and row["option"] == "1" and row["reference"] == "a"]
    assert float(bare[0]["value"]) == pytest.approx(0.0769, abs=5e-5)  # a fraction, as in the JSON


@pytest.mark.parametrize("start", ["=", "+", "-", "@", "\t", "\r", "\n"])
def test_a_reference_is_no_formula_in_a_spreadsheet(tmp_path: Path, start: str) -> None:
    # OWASP, CSV injection: cells that begin so are taken for formulas
    content = {**WEAK, "reference": f'{start}HYPERLINK("http://example.com")'}
    text = run("compare", visit_file(tmp_path, content), "--csv").stdout
    references = {row["reference"] for row in csv.DictReader(io.StringIO(text, newline=""))}
    assert references == {f"'{content['reference']}"}


def test_a_file_name_is_no_formula_either(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    visit_file(tmp_path, WEAK, "=1+1.json")
    monkeypatch.chdir(tmp_path)
    rows = list(csv.DictReader(io.StringIO(run("compare", "=1+1.json", "--csv").stdout)))
    assert {row["file"] for row in rows} == {"'=1+1.json"}


def test_a_range_file_changes_what_is_sold(tmp_path: Path) -> None:
    stock = tmp_path / "ours.toml"
    stock.write_text('[[coating]]\nkey = "own"\nlabel = "Ourfilm"\nprice = 5\nlayers = [["MgF2", 99.6]]\n', "utf-8")
    file = visit_file(tmp_path, {**WEAK, "options": [{"coating": "own"}]})
    assert "Ourfilm" in run("compare", file, "--range", stock).stdout
    assert "“own” is not in the range" in run("compare", file, status=1).stderr


@pytest.mark.parametrize("content", [None, "[[material]\n", '[shop]\nregion = "uk1"\n', "[shop]\ncolour = 1\n"])
def test_a_range_file_that_cannot_be_used_is_told_in_sentences(tmp_path: Path, content: str | None) -> None:
    stock = tmp_path / "ours.toml"
    if content is not None:
        stock.write_text(content, encoding="utf-8")
    told = run("compare", visit_file(tmp_path, WEAK), "--range", stock, status=1).stderr
    assert told.startswith(f"{stock}: ")
    assert len(told.splitlines()) == 1


def test_both_flags_at_once_are_a_call_not_understood(tmp_path: Path) -> None:
    told = run("compare", visit_file(tmp_path, WEAK), "--json", "--csv", status=2).stderr
    assert "Choose one of --json and --csv." in told


# --- bad files -------------------------------------------------------------------------------------------------------

BAD: dict[str, tuple[Callable[[Path], object], str]] = {
    "empty": (lambda p: p.write_text(""), "this is not JSON: line 1, column 1."),
    "malformed": (lambda p: p.write_text('{"prescription": {'), "this is not JSON"),
    "not-a-number": (lambda p: p.write_text('{"prescription": {"right": {"sphere": NaN}}}'), "NaN and Infinity"),
    "infinite": (lambda p: p.write_text('{"prescription": {"right": {"sphere": -Infinity}}}'), "NaN and Infinity"),
    "huge-number": (lambda p: p.write_text('{"baseline": 1' + "0" * 5000 + "}"), "write a number here"),
    "very-large-power": (lambda p: p.write_text(prescribed('{"sphere": 1e308}')), "give 30 or less"),
    "huge": (lambda p: p.write_text('{"note": "' + "x" * 2_100_000 + '"}'), "larger than 2 MB"),
    "deep": (lambda p: p.write_text("[" * 100_000), "nested too deeply"),
    "list": (lambda p: p.write_text("[]"), "put named fields between braces"),
    "null": (lambda p: p.write_text("null"), "put named fields between braces"),
    "twice": (lambda p: p.write_text('{"date": null, "date": null}'), "stands twice"),
    "bytes": (lambda p: p.write_bytes(b"\xff\xfe\x00{"), "not UTF-8"),
    "folder": (lambda p: p.mkdir(), "cannot be read"),
    "unknown-name": (lambda p: p.write_text(prescribed('{"spere": -1}')), "did you mean “sphere”?"),
    "unknown-key": (
        lambda p: p.write_text(prescribed('{"sphere": -1}', '"options": [{"coating": "brodband"}]')),
        "did you mean “broadband”?",
    ),
    "no-axis": (lambda p: p.write_text(prescribed('{"sphere": -1, "cylinder": -1}')), "needs an axis from 1 to 180"),
    "axis-181": (
        lambda p: p.write_text(prescribed('{"sphere": -1, "cylinder": -1, "axis": 181}')), "give 180 or less"
    ),
    "beyond-30": (lambda p: p.write_text(prescribed('{"sphere": -30.25}')), "give -30 or more"),
    "together-beyond": (
        lambda p: p.write_text(prescribed('{"sphere": -29, "cylinder": -2, "axis": 5}')), "powers beyond 30"
    ),
    "text-number": (lambda p: p.write_text(prescribed('{"sphere": "-1"}')), "without quotation marks"),
    "no-spheres": (lambda p: p.write_text('{"prescription": {"right": {}, "left": {}}}'), "this is missing"),
    "surrogate": (lambda p: p.write_text('{"reference": "\\ud800", "prescription": 1}'), "write text"),
}  # fmt: skip


def prescribed(right: str, more: str = '"note": ""') -> str:
    return f'{{"prescription": {{"right": {right}, "left": {{"sphere": -1}}}}, {more}}}'


@pytest.mark.parametrize("kind", BAD)
def test_a_bad_file_is_told_by_name_and_remedy_and_ends_with_1(tmp_path: Path, kind: str) -> None:
    make, told = BAD[kind]
    path = tmp_path / "bad.json"
    make(path)
    result = run("compare", path, "--json", status=1)
    assert result.stdout == ""
    lines = result.stderr.splitlines()
    assert 1 <= len(lines) <= 6
    assert all(line.startswith(f"{path}: ") or line.startswith("and ") for line in lines)
    assert told in result.stderr


def test_many_faults_are_five_lines_and_a_count(tmp_path: Path) -> None:
    content = {"prescription": {"right": {"sphere": 99}, "left": {"sphere": 99}}, **{f"x{k}": 1 for k in range(7)}}
    lines = run("compare", visit_file(tmp_path, content), status=1).stderr.splitlines()
    assert len(lines) == 6
    assert lines[-1] == "and 4 more"


def test_a_whole_folder_of_bad_files_is_told_line_by_line_and_the_good_one_is_compared(tmp_path: Path) -> None:
    for kind, (make, _) in BAD.items():
        make(tmp_path / f"{kind}.json")
    good = visit_file(tmp_path, WEAK, "zz-good.json")
    result = run("compare", *sorted(tmp_path.glob("*.json")), "--json", status=1)
    assert len(result.stdout.splitlines()) == 1
    told = {line.split(":")[0] for line in result.stderr.splitlines() if not line.startswith("and ")}
    assert told == {str(path) for path in tmp_path.glob("*.json")} - {str(good)}


ODD = [None, True, 0, -1, 0.25, 12, 29, -30, 30, 180, 1e-300, 1e308, 10**400, "", "yes", "often", "drilled", "bare",
       "broadband", "2026-12-01", "\x00", "x" * 300, [], [1], {}, {"a": 1}, {"right": 1}]  # fmt: skip


def places(value: Any, path: tuple[Any, ...] = ()) -> list[tuple[Any, ...]]:
    """List the way to every part of a file."""
    inner = value.items() if isinstance(value, dict) else enumerate(value) if isinstance(value, list) else ()
    return [path, *(place for name, part in inner for place in places(part, (*path, name)))]


@settings(
    max_examples=150,
    derandomize=True,
    deadline=None,
    database=None,
    suppress_health_check=[HealthCheck.function_scoped_fixture, HealthCheck.too_slow],
)
@given(seed=st.integers(0, 2**32), changes=st.integers(1, 3))
def test_no_change_of_a_visit_file_ever_shows_a_traceback(tmp_path: Path, seed: int, changes: int) -> None:
    choose = random.Random(seed)  # noqa: S311  # no secret depends on it
    content = copy.deepcopy(json.loads(choose.choice(DEMO).read_text(encoding="utf-8")))
    for _ in range(changes):
        *path, last = choose.choice(places(content)[1:])
        part = content
        for step in path:
            part = part[step]
        if choose.random() < 0.2:
            del part[last]
        else:
            part[last] = copy.deepcopy(choose.choice(ODD))
    result = CliRunner().invoke(main, ["compare", str(visit_file(tmp_path, content)), "--json"])
    assert result.exception is None or isinstance(result.exception, SystemExit), repr(result.exception)
    assert result.exit_code in (0, 1)
    if result.exit_code == 0:
        json.loads(result.stdout, parse_constant=lambda name: pytest.fail(f"{name} in the answer"))
    else:
        assert 1 <= len(result.stderr.splitlines()) <= 6


# --- the other commands ----------------------------------------------------------------------------------------------


def test_the_version_is_that_of_the_package() -> None:
    assert run("--version").stdout == f"twolight, version {__version__}\n"


@pytest.mark.parametrize("name", ["visit", "range", "comparison"])
def test_a_schema_is_the_published_file(name: Any) -> None:
    assert run("schema", name).stdout == schema_path(name).read_text(encoding="utf-8")


def test_the_schema_asked_for_without_a_name_is_the_visits() -> None:
    assert run("schema").stdout == run("schema", "visit").stdout
    run("schema", "order", status=2)


def test_a_range_goes_out_and_comes_back_the_same(tmp_path: Path) -> None:
    data, first, again = tmp_path / "data", tmp_path / "first.toml", tmp_path / "again.toml"
    run("--data", data, "range", "export", first)
    assert first.read_text(encoding="utf-8") == range_to_toml(builtin_range())
    text = first.read_text(encoding="utf-8").replace('label = "Hard resin 1.50"', 'label = "Our own resin"')
    first.write_text(text, encoding="utf-8")
    assert "9 materials" in run("--data", data, "range", "import", first).stdout
    run("--data", data, "range", "export", again)
    assert again.read_text(encoding="utf-8") == first.read_text(encoding="utf-8")
    file = visit_file(tmp_path, {**WEAK, "options": [{"material": "hard-resin-150"}]})
    assert "Our own resin" in run("--data", data, "compare", file).stdout
    assert "Our own resin" not in run("--data", tmp_path / "other", "compare", file).stdout


def test_a_range_that_cannot_be_used_is_not_taken_in(tmp_path: Path) -> None:
    broken = tmp_path / "broken.toml"
    broken.write_text('[[coating]]\nkey = "a"\n', encoding="utf-8")
    data = tmp_path / "data"
    told = run("--data", data, "range", "import", broken, status=1).stderr
    assert told == f"{broken}: coating[0]: give exactly one of layers, declared and spectrum.\n"
    run("--data", data, "range", "export", tmp_path / "out.toml")
    assert (tmp_path / "out.toml").read_text(encoding="utf-8") == range_to_toml(builtin_range())


WRITERS: dict[str, Callable[[Path], list[object]]] = {
    "range export": lambda out: ["range", "export", out.with_suffix(".toml")],
    "sheet": lambda out: ["sheet", DEMO[0], "-o", out.with_suffix(".html")],
}


@pytest.mark.parametrize("command", WRITERS)
@pytest.mark.parametrize("place", ["missing folder", "file for a folder", "a folder itself"])
def test_a_file_that_cannot_be_written_is_told_and_nothing_half_written_stays(
    tmp_path: Path, command: str, place: str
) -> None:
    (tmp_path / "plain").write_text("kept", encoding="utf-8")
    out = {"missing folder": tmp_path / "none" / "out", "file for a folder": tmp_path / "plain" / "out"}.get(
        place, tmp_path / "out"
    )
    arguments = WRITERS[command](out)
    written = Path(str(arguments[-1]))
    if place == "a folder itself":
        written.mkdir()
    before = sorted(tmp_path.rglob("*"))
    told = run(*arguments, status=1).stderr
    assert told.startswith(f"{written} cannot be written: ")
    assert told.count("\n") == 1
    assert [path for path in sorted(tmp_path.rglob("*")) if path not in before] == []
    assert (tmp_path / "plain").read_text(encoding="utf-8") == "kept"


def test_a_file_that_was_there_is_replaced_whole(tmp_path: Path) -> None:
    out = tmp_path / "sheet.html"
    out.write_text("old", encoding="utf-8")
    assert run("sheet", DEMO[0], "-o", out, "--option", 1).stdout == f"{out}\n"
    text = out.read_text(encoding="utf-8")
    assert text.lower().startswith("<!doctype html>")
    assert [path.name for path in tmp_path.iterdir()] == ["sheet.html"]


@pytest.mark.parametrize(
    ("arguments", "status", "told"),
    [
        (["sheet", DEMO[0], "-o", "out.txt"], 2, "ends in .pdf or .html"),
        (["sheet", DEMO[0]], 2, "Missing option"),
        (["sheet", DEMO[0], "-o", "out.html", "--option", 0], 2, "x>=1"),
        (["sheet", DEMO[0], "-o", "out.html", "--option", 99], 1, "99"),
        (["sheet", DEMO[0], "-o", "out.html", "--language", "xx"], 1, "There are no texts in “xx”"),
        (["sheet", "none.json", "-o", "out.html"], 1, "there is no such file"),
        (["order", "none.json", "-o", "out.html"], 1, "there is no such file"),
        (["--port", 0, "compare", DEMO[0]], 2, "port"),
    ],
)
def test_a_call_that_cannot_be_met_is_told_and_writes_nothing(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, arguments: list[object], status: int, told: str
) -> None:
    monkeypatch.chdir(tmp_path)
    assert told in run(*arguments, status=status).stderr
    assert [path for path in tmp_path.iterdir() if path.suffix] == []


def test_the_demo_tells_when_its_folder_cannot_be_made(tmp_path: Path) -> None:
    (tmp_path / "plain").write_text("", encoding="utf-8")
    told = run("demo", "--no-serve", "--out", tmp_path / "plain" / "out", status=1).stderr
    assert "cannot be made" in told


def test_the_whole_job_for_the_demo_wearers(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("advisor.web.pdf.is_available", lambda: False)  # the pages are laid out in their own test
    out = tmp_path / "demo"
    text = run("demo", "--no-serve", "--out", out).stdout
    assert f"{len(DEMO)} wearers compared; their sheets are in {out.resolve()} as HTML" in text
    stems = {path.stem for path in DEMO}
    assert {path.name for path in out.iterdir()} == {f"{s}.html" for s in stems} | {f"{s}.json" for s in stems}
    for stem in stems:
        Comparison.model_validate_json((out / f"{stem}.json").read_text(encoding="utf-8"))


def test_compare_leaves_no_records_behind(tmp_path: Path) -> None:
    run("--data", tmp_path / "data", "compare", DEMO[0])
    assert not (tmp_path / "data").exists()


def test_a_records_file_that_is_no_records_is_told_in_a_sentence(tmp_path: Path) -> None:
    data = tmp_path / "data"
    data.mkdir()
    (data / "twolight.sqlite3").write_bytes(b"not a database at all" * 100)
    told = run("--data", data, "compare", DEMO[0], status=1).stderr
    assert told.strip()
