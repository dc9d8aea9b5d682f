"""The wheel carries what the program needs; a missing folder would be skipped without a word."""

import subprocess
import sys
import zipfile
from pathlib import Path

import pytest

from advisor.web.language import SOURCE_LANGUAGE, languages

ROOT = Path(__file__).resolve().parent.parent


@pytest.fixture(scope="module")
def names(tmp_path_factory: pytest.TempPathFactory) -> set[str]:
    folder = tmp_path_factory.mktemp("wheel")
    subprocess.run(
        [sys.executable, "-m", "hatchling", "build", "-t", "wheel", "-d", str(folder)],
        cwd=ROOT,
        check=True,
        capture_output=True,
    )
    (wheel,) = folder.glob("*.whl")
    return set(zipfile.ZipFile(wheel).namelist())


@pytest.mark.parametrize("folder", ["templates", "static", "demo_patients", "advisor"])
def test_every_file_of_a_folder_is_in_the_wheel(folder: str, names: set[str]) -> None:
    tracked = subprocess.run(
        ["git", "ls-files", folder], cwd=ROOT, check=True, capture_output=True, text=True
    ).stdout.split("\n")
    files = [name for name in tracked if name and (ROOT / name).is_file()]
    assert files
    inside = {name if folder == "advisor" else f"advisor/{name}" for name in files}
    assert inside <= names


@pytest.mark.parametrize("code", [code for code in languages() if code != SOURCE_LANGUAGE])
def test_every_language_is_in_the_wheel(code: str, names: set[str]) -> None:
    catalogues = {f"advisor/translations/{code}/LC_MESSAGES/messages.{kind}" for kind in ("po", "mo")}
    assert catalogues | {f"advisor/counsel/data/heard/{code}.toml"} <= names


def test_the_wheel_holds_no_tests(names: set[str]) -> None:
    assert not [name for name in names if name.startswith("tests")]
