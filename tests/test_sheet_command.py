"""The sheet command: one sheet, the page about care, large print, and many visits into a folder."""

import io
from pathlib import Path

import pytest
from click.testing import CliRunner, Result
from pypdf import PdfReader

from advisor.cli import main
from advisor.resources import resource_dir

DEMO = sorted(resource_dir("demo_patients").glob("*.json"))


def run(tmp_path: Path, *given: object) -> Result:
    return CliRunner().invoke(main, ["--data", str(tmp_path / "data"), "sheet", *map(str, given)])


def test_large_print_and_care_are_asked_for(tmp_path: Path) -> None:
    out = tmp_path / "sheet.html"
    assert run(tmp_path, DEMO[0], "-o", out, "--language", "en", "--print", "large").exit_code == 0
    large = out.read_text("utf-8")
    assert "--text: 18pt" in large
    assert run(tmp_path, DEMO[0], "-o", out, "--language", "en", "--care-only", "--print", "standard").exit_code == 0
    care = out.read_text("utf-8")
    assert "How to care for your glasses" in care
    assert "What you chose" not in care
    assert "--text: 12pt" in care
    assert 'url("data:image/svg+xml;base64,' in care  # the marks are inside, too


def test_a_folder_of_visits_becomes_a_folder_of_sheets(tmp_path: Path) -> None:
    out = tmp_path / "sheets"
    answer = run(tmp_path, resource_dir("demo_patients"), "-o", out)
    assert answer.exit_code == 0, answer.output
    assert answer.output == f"{len(DEMO)} of {len(DEMO)} sheets written to {out}.\n"
    assert {path.name for path in out.iterdir()} == {f"{path.stem}.pdf" for path in DEMO}
    for path in DEMO:
        assert len(PdfReader(io.BytesIO((out / f"{path.stem}.pdf").read_bytes())).pages) in (2, 3, 4)


def test_bad_files_are_told_and_the_rest_go_on(tmp_path: Path) -> None:
    bad, out = tmp_path / "bad.json", tmp_path / "sheets"
    bad.write_text("{", encoding="utf-8")
    answer = run(tmp_path, bad, DEMO[0], tmp_path / "none.json", "-o", out, "--care-only")
    assert answer.exit_code == 1
    assert "1 of 3 sheets written" in answer.output
    assert str(bad) in answer.output
    assert "none.json: there is no such file" in answer.output
    assert [path.name for path in out.iterdir()] == [f"{DEMO[0].stem}.pdf"]


def test_two_files_of_one_name_do_not_overwrite_each_other(tmp_path: Path) -> None:
    other = tmp_path / "other"
    other.mkdir()
    (other / DEMO[0].name).write_bytes(DEMO[1].read_bytes())
    out = tmp_path / "sheets"
    assert run(tmp_path, DEMO[0], other / DEMO[0].name, "-o", out, "--care-only").exit_code == 0
    assert {path.name for path in out.iterdir()} == {f"{DEMO[0].stem}.pdf", f"{DEMO[0].stem}-2.pdf"}


@pytest.mark.parametrize("name", ["all.pdf", "all.html"])
def test_several_sheets_do_not_go_into_one_file(tmp_path: Path, name: str) -> None:
    answer = run(tmp_path, DEMO[0], DEMO[1], "-o", tmp_path / name)
    assert answer.exit_code == 2
    assert "go into a folder" in answer.output


def test_an_empty_folder_is_no_success(tmp_path: Path) -> None:
    (tmp_path / "empty").mkdir()
    answer = run(tmp_path, tmp_path / "empty", "-o", tmp_path / "sheets")
    assert answer.exit_code == 1
    assert "0 of 0 sheets" in answer.output
