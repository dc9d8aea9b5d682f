"""Documents that can rot: commands in README.md, modules in DEVELOPERS.md, and words that no file may hold."""

import re
import shlex
import subprocess
from pathlib import Path

import click
import pytest

from advisor.cli import main
from advisor.counsel.stock import builtin_range

ROOT = Path(__file__).resolve().parent.parent
README, DEVELOPERS = ROOT / "README.md", ROOT / "DEVELOPERS.md"
PACKAGE = ROOT / "advisor"


def text_of(path: Path) -> str:
    return path.read_text(encoding="utf-8") if path.exists() else ""


def code(text: str) -> list[str]:
    """Return the lines of all code blocks and every piece of code inside a sentence."""
    blocks = re.findall(r"^```[^\n]*\n(.*?)^```", text, re.DOTALL | re.MULTILINE)
    inline = re.findall(r"`([^`\n]+)`", re.sub(r"^```.*?^```", "", text, flags=re.DOTALL | re.MULTILINE))
    return [line for block in blocks for line in block.splitlines()] + inline


def invocations(text: str) -> list[list[str]]:
    """Return the words after ``twolight`` of every invocation in the code of a document."""
    found = []
    for line in code(text):
        for part in re.split(r"&&|;|\|", line):
            match = re.search(r"(?:^|[\s/\\])(?:twolight|python -m advisor)(?=\s|$)(.*)", part.strip())
            if match:
                found.append(shlex.split(match.group(1), comments=True))
    return found


def unknown_words(words: list[str], command: click.Command) -> list[str]:
    """Return what of an invocation the command does not have: a command or an option."""
    options = {name for parameter in command.params for name in (*parameter.opts, *parameter.secondary_opts)}
    wrong = []
    for place, word in enumerate(words):
        if word.startswith("-"):
            if word.split("=")[0] not in options | {"--help", "-h"}:
                wrong.append(word)
        elif isinstance(command, click.Group):
            inner = command.commands.get(word)
            takes_value = place > 0 and words[place - 1] in ("--data", "--database", "--port")
            if inner is not None:
                return wrong + unknown_words(words[place + 1 :], inner)
            if not takes_value:
                wrong.append(word)
    return wrong


INVOCATIONS = [(path.name, words) for path in (README, DEVELOPERS) for words in invocations(text_of(path))]


@pytest.mark.parametrize(("document", "words"), INVOCATIONS, ids=[" ".join((d, *w)) for d, w in INVOCATIONS])
def test_a_command_in_a_document_exists_with_its_options(document: str, words: list[str]) -> None:
    assert unknown_words(words, main) == [], document


def test_the_reader_of_commands_knows_a_wrong_one() -> None:
    assert invocations("Run `twolight compare FILE --json`, then\n```sh\n.venv/bin/twolight demo\n```\n") == [
        ["demo"],
        ["compare", "FILE", "--json"],
    ]
    assert unknown_words(["compare", "FILE", "--yaml"], main) == ["--yaml"]
    assert unknown_words(["contrast", "FILE"], main)[0] == "contrast"
    assert unknown_words(["--data", "DIR", "range", "export", "FILE"], main) == []
    assert unknown_words(["range", "print", "FILE"], main)[0] == "print"


def test_every_command_stands_in_the_readme() -> None:
    told = {words[0] for words in invocations(README.read_text(encoding="utf-8")) if words}
    assert set(main.commands) <= told


def test_the_readme_begins_with_the_job_and_then_how_to_run_and_to_test_it() -> None:
    title, first, *_ = README.read_text(encoding="utf-8").split("\n\n")
    assert title.startswith("# ")
    assert len(first.split()) > 40
    assert not first.lstrip().startswith(("#", "-", "```", "!"))
    everything = code(README.read_text(encoding="utf-8"))
    assert any("pip install" in line and line.rstrip().endswith("twolight demo") for line in everything)
    assert any(".venv/bin/pytest" in line for line in everything)


@pytest.mark.parametrize("document", [README, DEVELOPERS], ids=lambda path: path.name)
def test_files_and_folders_named_in_a_document_exist(document: Path) -> None:
    named = {
        piece.strip("`./").split(" ")[0]
        for piece in code(document.read_text(encoding="utf-8"))
        if re.fullmatch(r"\.?(?:[\w.-]+/)+[\w.-]*|[\w-]+\.(?:py|md|toml)", piece)
    }
    written_by_the_program = {"twolight-demo", "twolight.toml"}
    bases = (ROOT, PACKAGE, ROOT / "tests", ROOT / "templates", ROOT / "static")
    missing = {
        name
        for name in named - written_by_the_program
        if not name.startswith("venv")
        and not (ROOT / f".{name}").exists()
        and not any((base / name).exists() for base in bases)
        and not list(PACKAGE.rglob(name))
    }
    assert missing == set()


def test_every_module_stands_in_the_developers_document() -> None:
    text = DEVELOPERS.read_text(encoding="utf-8")
    modules = {path.relative_to(PACKAGE) for path in PACKAGE.rglob("*.py") if path.name != "__init__.py"}
    grouped = {path for path in modules if "migrations" in path.parts}  # one line stands for all of them
    assert {str(path) for path in modules - grouped if path.name not in text} == set()


@pytest.mark.parametrize("document", [README, DEVELOPERS], ids=lambda path: path.name)
def test_pictures_and_links_into_the_project_lead_somewhere(document: Path) -> None:
    targets = re.findall(r"\]\(([^)#\s]+)", document.read_text(encoding="utf-8"))
    assert [target for target in targets if "://" not in target and not (ROOT / target).exists()] == []


# --- words that no file may hold -------------------------------------------------------------------------------------

# Spelled in pieces, so that this file is no hit itself.
FORBIDDEN = [
    "lec" + "ture",
    "trans" + "cript",
    "/wo" + "rk/",
    "/tm" + "p/",
    "sha" + "red/",
    "py" + "pi.org",
    "python" + "hosted",
    "registry." + "npmjs",
    "plan" + ".md",
]
BINARY = {".ttf", ".woff2", ".png", ".mo", ".ico", ".gz"}
LICENCES = {"OFL.txt", "htmx.min.js", "htmx.LICENSE"}


def tracked() -> list[Path]:
    done = subprocess.run(["git", "ls-files", "-z"], cwd=ROOT, capture_output=True, check=False)
    names = done.stdout.decode().split("\0") if done.returncode == 0 else []
    return [ROOT / name for name in names if name and (ROOT / name).is_file()]


def test_no_tracked_file_tells_how_or_where_it_was_made() -> None:
    files = tracked()
    if not files:
        pytest.skip("not a git checkout")
    found = [
        f"{path.relative_to(ROOT)}: {word}"
        for path in files
        if path.suffix not in BINARY and path.name not in LICENCES
        for text in [path.read_text(encoding="utf-8").lower()]
        for word in FORBIDDEN
        if re.search(rf"(?<![\w.]){re.escape(word)}" if word[0].isalpha() else re.escape(word), text)
    ]
    assert found == []


def test_every_figure_of_a_built_in_material_has_its_source() -> None:
    for material in builtin_range().material:
        assert isinstance(material.source, dict), material.key
        stated = set(material.model_dump(exclude_none=True)) - {"key", "label", "source"}
        assert stated <= set(material.source), material.key
