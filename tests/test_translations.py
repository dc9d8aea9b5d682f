"""Catalogues complete and sound, and nothing said to people outside of them."""

import ast
import re
import shlex
import subprocess
import sys
from collections import Counter
from collections.abc import Iterator
from pathlib import Path

import pytest
from babel.messages.catalog import Catalog, Message
from babel.messages.mofile import read_mo
from babel.messages.pofile import read_po
from jinja2 import Environment

from advisor.resources import resource_dir
from advisor.web.language import SOURCE_LANGUAGE, TRANSLATIONS, languages
from tests.pseudo_language import ROOT, messages

PACKAGE = Path(TRANSLATIONS).parent
TEMPLATES = resource_dir("templates")
TRANSLATED = [code for code in languages() if code != SOURCE_LANGUAGE]
PLACE = re.compile(r"%\(\w+\)s")
TAG = re.compile(r"</?\w+[^>]*>")


def test_the_source_language_is_always_there() -> None:
    assert set(languages()) >= {"en"}


def catalogue(code: str) -> Catalog:
    with (TRANSLATIONS / code / "LC_MESSAGES" / "messages.po").open("rb") as stream:
        return read_po(stream, locale=code)


def forms(entry: str | tuple[str, ...] | list[str] | None) -> tuple[str, ...]:
    return (entry or "",) if isinstance(entry, str | None) else tuple(entry)


def is_stopped(text: str) -> bool:
    """Tell whether a text ends as a sentence that states something does, whatever quotes stand behind."""
    return text.rstrip("»“”\N{NO-BREAK SPACE}\N{NARROW NO-BREAK SPACE} ").endswith((".", "…"))


def problems(message: Message, checked_in: Catalog) -> list[str]:
    """Say what is wrong with one translation: signs, tags, full stops, and what babel itself finds."""
    ids, texts = forms(message.id), forms(message.string)
    found = [str(error) for error in message.check(checked_in)]
    for text in texts:
        if not text:
            found.append("not translated")
            continue
        source = ids[-1]
        if not set(PLACE.findall(ids[0])) <= set(PLACE.findall(text)) <= set(PLACE.findall(source)):
            found.append("other placeholders")
        is_formatted = "%%" in source or bool(PLACE.search(source))
        if is_formatted and "%" in PLACE.sub("", text).replace("%%", ""):
            found.append("a bare percent sign where it must be doubled")
        if not is_formatted and "%%" in text:
            found.append("a doubled percent sign where it is single")
        if Counter(TAG.findall(text)) != Counter(TAG.findall(source)):
            found.append("other tags")
        if is_stopped(source) != is_stopped(text):
            found.append("a full stop more or less")
        if (source[:1].isspace(), source[-1:].isspace()) != (text[:1].isspace(), text[-1:].isspace()):
            found.append("blanks at the ends")
    return found


@pytest.mark.parametrize("code", TRANSLATED)
def test_a_catalogue_has_every_message_and_no_other(code: str) -> None:
    known, own = {forms(m.id) for m in messages() if m.id}, {forms(m.id) for m in catalogue(code) if m.id}
    assert sorted(known - own) == []
    assert sorted(own - known) == []
    assert list(catalogue(code).obsolete) == []


@pytest.mark.parametrize("code", TRANSLATED)
def test_every_translation_is_there_sure_and_takes_the_same_figures(code: str) -> None:
    whole = catalogue(code)
    found = {message.id: problems(message, whole) for message in whole if message.id}
    assert {key: told for key, told in found.items() if told} == {}
    assert [message.id for message in whole if message.id and message.fuzzy] == []


@pytest.mark.parametrize("code", TRANSLATED)
def test_the_compiled_catalogue_is_the_written_one(code: str) -> None:
    with (TRANSLATIONS / code / "LC_MESSAGES" / "messages.mo").open("rb") as stream:
        compiled = {forms(m.id): forms(m.string) for m in read_mo(stream) if m.id}
    assert compiled == {forms(m.id): forms(m.string) for m in catalogue(code) if m.id}


@pytest.mark.parametrize(
    ("source", "text", "fault"),
    [
        ("at most %(limit)s.", "como mucho.", "other placeholders"),
        ("at most %(limit)s.", "como mucho %(limite)s.", "other placeholders"),
        ("at most %(limit)s.", "como mucho %(limit)s", "a full stop more or less"),
        ("%(share)s %% of it", "%(share)s % de ello", "a bare percent sign where it must be doubled"),
        ("below 2 % of it", "menos del 2 %% de ello", "a doubled percent sign where it is single"),
        ("a <b>word</b>", "una palabra", "other tags"),
        ("a word", "", "not translated"),
        ("a word", " una palabra", "blanks at the ends"),
    ],
)
def test_a_faulty_translation_is_told(source: str, text: str, fault: str) -> None:
    whole = Catalog(locale="es")
    assert fault in problems(whole.add(source, text), whole)


def test_a_sound_translation_passes() -> None:
    whole = Catalog(locale="fr")
    source, text = "%(share)s %% of “%(name)s”.", "%(share)s %% de « %(name)s »."
    assert problems(whole.add(source, text), whole) == []


def test_the_commands_for_a_new_language_work_as_written(tmp_path: Path) -> None:
    text = (ROOT / "DEVELOPERS.md").read_text("utf-8")
    commands = re.findall(r"`\.venv/bin/pybabel ([^`\n]+)`", text)
    assert [command.removeprefix("-q ").split()[0] for command in commands] == ["extract", "init", "update", "compile"]
    for command in commands:
        own = command.replace("CODE", "eo").replace("messages.pot", str(tmp_path / "messages.pot"))
        words = shlex.split(own.replace("advisor/translations", str(tmp_path / "translations")))
        babel = [sys.executable, "-m", "babel.messages.frontend"]
        subprocess.run([*babel, *words], cwd=ROOT, check=True, capture_output=True)
    assert (tmp_path / "translations" / "eo" / "LC_MESSAGES" / "messages.mo").exists()


# Nothing said outside of the catalogues.

SENTENCE = re.compile(r"[A-Z“][^\n]* [^\n]*[.!?]")
# What people read that is not translated, by module: what the terminal says, and citations of laws and papers.
SAID_AS_IT_IS = {
    "web/server.py": "the terminal speaks English",
    "counsel/caution_texts.py": "names of standards and papers",
    "counsel/tolerances.py": "names of standards and papers",
}


def modules() -> Iterator[Path]:
    for layer in ("counsel", "web", "records"):
        yield from sorted((PACKAGE / layer).rglob("*.py"))


def docstrings(tree: ast.AST) -> set[int]:
    owners = (ast.Module, ast.ClassDef, ast.FunctionDef, ast.AsyncFunctionDef)
    firsts = [node.body[0] for node in ast.walk(tree) if isinstance(node, owners) and node.body]
    return {id(first.value) for first in firsts if isinstance(first, ast.Expr)}


def unmarked_sentences(tree: ast.AST) -> list[str]:
    """Return the string constants that read as sentences and stand neither in ``mark`` nor as a docstring."""
    marked = {
        id(part)
        for node in ast.walk(tree)
        if isinstance(node, ast.Call) and isinstance(node.func, ast.Name) and node.func.id == "mark"
        for part in ast.walk(node)
    }
    developers = {  # what a ValueError, TypeError or RuntimeError says is for whoever calls the code wrongly
        id(part)
        for node in ast.walk(tree)
        if isinstance(node, ast.Raise) and isinstance(node.exc, ast.Call) and isinstance(node.exc.func, ast.Name)
        if node.exc.func.id in ("ValueError", "TypeError", "RuntimeError")
        for part in ast.walk(node)
    }
    spared = marked | developers | docstrings(tree)
    inner = {id(part) for node in ast.walk(tree) if isinstance(node, ast.JoinedStr) for part in node.values}
    found = []
    for node in ast.walk(tree):
        if id(node) in spared | inner:
            continue
        if isinstance(node, ast.JoinedStr):
            text = "".join(str(part.value) if isinstance(part, ast.Constant) else "x" for part in node.values)
        elif isinstance(node, ast.Constant) and isinstance(node.value, str):
            text = node.value
        else:
            continue
        if SENTENCE.fullmatch(text):
            found.append(text)
    return found


def test_no_sentence_stands_in_the_code_unmarked() -> None:
    found = {
        name: told
        for path in modules()
        if (name := path.relative_to(PACKAGE).as_posix()) not in SAID_AS_IT_IS
        and (told := unmarked_sentences(ast.parse(path.read_text("utf-8"))))
    }
    assert found == {}


def test_an_unmarked_sentence_is_found() -> None:
    told = (
        'def f(n):\n    """Do it."""\n    g("There is nothing here.")\n'
        '    h(f"There is no option {n}.")\n    mark("It is done.")'
    )
    assert unmarked_sentences(ast.parse(told)) == ["There is nothing here.", "There is no option x."]


# Words that stay as they are in every language: the program's name, units, letters of formulas and of function keys,
# names of file formats; and "open", which a macro writes as an attribute.
WORDS_AS_THEY_ARE = frozenset({"Twolight", "PDF", "mm", "nm", "cm", "a", "b", "n", "D", "F", "open"})
READ_ALOUD = re.compile(
    r'\b(?:alt|title|aria-label|placeholder|data-[a-z-]*(?:text|words|working|long|failed))="([^"]*)"'
)
HOLE = "\x00"


def unmarked_words(source: str) -> list[str]:
    """Return the words of a template that stand outside of its expressions."""
    parts: list[str] = []
    for _, kind, text in Environment(autoescape=True, extensions=["jinja2.ext.i18n"]).lex(source):
        if kind == "data":
            parts.append(text)
        elif not parts or parts[-1] != HOLE:
            parts.append(HOLE)
    page = "".join(parts)
    spoken = READ_ALOUD.findall(page)
    shown = re.sub(r'aria-\w+="[^"]*"', "\n", re.sub(r"<[^>]*>", "\n", page))  # macros write attributes, too
    words = re.findall(r"[^\W\d_]+", re.sub(r"&\w+;", " ", " ".join([shown, *spoken])))
    return [word for word in words if word not in WORDS_AS_THEY_ARE]


@pytest.mark.parametrize(
    "path", sorted(TEMPLATES.rglob("*.html")), ids=lambda path: path.relative_to(TEMPLATES).as_posix()
)
def test_no_word_stands_in_a_template_unmarked(path: Path) -> None:
    assert unmarked_words(path.read_text("utf-8")) == []


def test_an_unmarked_word_is_found() -> None:
    told = '<p title="Help">{{ _("here") }} there {% if x %}<b class="{{ y }}">now</b>{% endif %} 3 mm</p>'
    assert unmarked_words(told) == ["there", "now", "Help"]


def test_scripts_hold_no_text() -> None:
    """What a script writes on the page comes from the page, where it was translated."""
    written = re.compile(r"""(["'`])(?:(?!\1).)*[A-Za-z]{2,} [A-Za-z]{2,} [A-Za-z]{2,}(?:(?!\1).)*\1""")
    own = [path for path in (resource_dir("static") / "js").glob("*.js") if not path.name.endswith(".min.js")]
    assert own
    found = {path.name: [m.group(0) for m in written.finditer(_code_alone(path.read_text("utf-8")))] for path in own}
    assert {name: told for name, told in found.items() if told} == {}


def _code_alone(script: str) -> str:
    return re.sub(r"^\s*//.*$|/\*.*?\*/", "", script, flags=re.MULTILINE | re.DOTALL)
