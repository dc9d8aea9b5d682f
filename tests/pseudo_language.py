"""A made-up language for tests: every message of the program with its Latin letters turned into Hebrew ones.

It runs from right to left, and whatever still shows Latin letters on a page was never translated.
"""

import re
import string
import subprocess
import sys
import tempfile
from functools import cache
from pathlib import Path

from babel.messages.catalog import Catalog
from babel.messages.mofile import write_mo
from babel.messages.pofile import read_po

ROOT = Path(__file__).resolve().parent.parent
CODE = "he"
KEPT = re.compile(r"%\(\w+\)s|%%|<[^>]*>|&\w+;")  # placeholders, doubled percent signs, tags, entities
LETTERS = "אבגדהוזחטיכלמנסעפצקרשתאבגד"
TABLE = str.maketrans(dict(zip(string.ascii_lowercase + string.ascii_uppercase, LETTERS * 2, strict=True)))


@cache
def messages() -> Catalog:
    """Return every message that the program marks, as ``pybabel extract`` finds them."""
    with tempfile.TemporaryDirectory() as folder:
        target = Path(folder) / "messages.pot"
        command = [sys.executable, "-m", "babel.messages.frontend", "-q", "extract"]
        command += ["-F", "pyproject.toml", "-k", "mark", "-o", str(target), "."]
        subprocess.run(command, cwd=ROOT, check=True, capture_output=True)
        with target.open("rb") as stream:
            return read_po(stream)


def in_hebrew(text: str) -> str:
    """Return a text in the made-up language; what the program puts in, or reads, is kept."""
    kept = KEPT.findall(text)
    parts = [part.translate(TABLE) for part in KEPT.split(text)]
    return "".join(part + end for part, end in zip(parts, [*kept, ""], strict=True))


def write_catalogue(translations: Path) -> None:
    """Write the made-up language's catalogue into a folder of translations."""
    catalogue = Catalog(locale=CODE)
    for message in messages():
        if isinstance(message.id, str) and message.id:
            catalogue.add(message.id, in_hebrew(message.id))
        elif message.id:
            catalogue.add(message.id, tuple(in_hebrew(message.id[-1]) for _ in range(catalogue.num_plurals)))
    folder = translations / CODE / "LC_MESSAGES"
    folder.mkdir(parents=True)
    with (folder / "messages.mo").open("wb") as stream:
        write_mo(stream, catalogue)
