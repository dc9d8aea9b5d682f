"""``twolight bring-in`` and ``twolight prescription``: files from and for other programs."""

import json
from pathlib import Path
from typing import Any

import pytest
from click.testing import CliRunner, Result

from advisor.cli import main
from advisor.counsel.visit import read_visit
from advisor.resources import resource_dir
from tests.frame_records import SIZES, WHOLE, trace

NIGHT = resource_dir("demo_patients") / "weak-minus-night-driver.json"
LENSES = [{"eye": "right", "sphere": -2.0}, {"eye": "left", "sphere": -1.0, "cylinder": -0.5, "axis": 0}]
PRESCRIPTION = {"resourceType": "VisionPrescription", "status": "active", "lensSpecification": LENSES}


def run(*arguments: object, status: int = 0) -> Result:
    result = CliRunner().invoke(main, [str(argument) for argument in arguments])
    assert result.exception is None or isinstance(result.exception, SystemExit), repr(result.exception)
    assert result.exit_code == status, result.output
    return result


def written(folder: Path, content: Any, name: str = "given") -> Path:
    path = folder / name
    text = content if isinstance(content, str) else json.dumps(content)
    path.write_text(text, encoding="utf-8", newline="")
    return path


def test_a_prescription_becomes_a_visit_file(tmp_path: Path) -> None:
    out = tmp_path / "visit.json"
    told = run("bring-in", written(tmp_path, PRESCRIPTION), "-o", out)
    assert told.stdout == f"{out}\n"
    assert "Measure PD, heights, vertex distance, tilt and the frame." in told.stderr
    visit = read_visit(out)
    assert (visit.prescription.right.sphere, visit.prescription.left.axis) == (-2.0, 180.0)
    run("compare", out, "--no-advice")


def test_one_of_several_prescriptions_is_chosen(tmp_path: Path) -> None:
    other = {**PRESCRIPTION, "lensSpecification": [{"eye": eye, "sphere": 1.0} for eye in ("right", "left")]}
    bad = {**PRESCRIPTION, "status": "cancelled"}
    bundle = {"resourceType": "Bundle", "entry": [{"resource": one} for one in (PRESCRIPTION, other, bad)]}
    file, out = written(tmp_path, bundle), tmp_path / "visit.json"
    run("bring-in", file, "-o", out, "--entry", 2)
    assert read_visit(out).prescription.right.sphere == 1.0
    out.unlink()
    refused = run("bring-in", file, "-o", out, "--entry", 3, status=1).stderr
    assert refused.startswith(f"{file}: entry[2].resource.status: this prescription is marked “cancelled”")
    assert "there is no number 4" in run("bring-in", file, "-o", out, "--entry", 4, status=1).stderr
    assert not out.exists()


@pytest.mark.parametrize("mirror", [False, True])
def test_a_frame_record_goes_into_a_visit(tmp_path: Path, mirror: bool) -> None:
    out = tmp_path / "visit.json"
    run("bring-in", written(tmp_path, WHOLE), "--into", NIGHT, "-o", out, *(["--mirror"] if mirror else []))
    before, after = read_visit(NIGHT), read_visit(out)
    assert after.model_copy(update={"frame": before.frame}) == before
    assert after.frame is not None
    assert (after.frame.a_mm, after.frame.b_mm, after.frame.dbl_mm) == (52.0, 38.0, 18.0)
    assert after.frame.outline is not None
    assert after.frame.outline.right is not None
    assert after.frame.outline.right[0][0] == pytest.approx(-26.0 if mirror else 26.0, abs=0.01)
    run("compare", out, "--no-advice")


def test_what_is_told_of_a_trace_goes_to_the_error_stream(tmp_path: Path) -> None:
    told = run("bring-in", written(tmp_path, SIZES + trace("R")), "--into", NIGHT, "-o", tmp_path / "visit.json")
    assert told.stderr == "Only one side is traced. The other is taken as its mirror image.\n"


def test_what_does_not_go_together_is_told(tmp_path: Path) -> None:
    out = tmp_path / "visit.json"
    record, prescription = written(tmp_path, WHOLE, "r"), written(tmp_path, PRESCRIPTION, "p")
    assert "give one with --into" in run("bring-in", record, "-o", out, status=1).stderr
    assert "no frame record" in run("bring-in", prescription, "-o", out, "--into", NIGHT, status=1).stderr
    assert "no such file" in run("bring-in", tmp_path / "none", "-o", out, status=1).stderr
    assert "cannot be read" in run("bring-in", tmp_path, "-o", out, status=1).stderr
    assert "neither a FHIR prescription" in run("bring-in", written(tmp_path, "x"), "-o", out, status=1).stderr
    assert not out.exists()


def test_a_prescription_is_written_for_others_with_the_name_only_where_asked(tmp_path: Path) -> None:
    out = tmp_path / "prescription.json"
    told = run("prescription", NIGHT, "-o", out)
    assert "This format has no place for:" in told.stderr
    before = read_visit(NIGHT)
    assert before.wearer is not None
    assert before.wearer.name
    assert before.wearer.name not in out.read_text("utf-8")
    run("prescription", NIGHT, "-o", out, "--name")
    assert json.loads(out.read_text("utf-8"))["patient"] == {"display": before.wearer.name}
    back = tmp_path / "back.json"
    run("bring-in", out, "-o", back)
    assert read_visit(back).prescription.right == before.prescription.right
