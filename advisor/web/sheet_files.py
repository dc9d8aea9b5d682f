"""Sheets of many visits at once: one file each in a folder, a bad visit is told and the rest go on."""

from collections.abc import Callable, Iterable, Iterator
from dataclasses import dataclass
from pathlib import Path

from advisor.counsel.faults import Faults
from advisor.counsel.stock import Range
from advisor.counsel.visit import Visit, read_visit
from advisor.errors import TwolightError
from advisor.web.documents import standing_alone
from advisor.web.pdf import is_available, write_pdf

Make = Callable[[Visit, Range], str]


@dataclass(frozen=True)
class Written:
    """What became of one visit file: the bytes of its sheet, or why there is none."""

    file: Path
    name: str
    content: bytes | None = None
    problem: str = ""


def files_in(given: Iterable[Path]) -> list[Path]:
    """Return the visit files given; of a folder, every one that ends in .json, in the order of their names."""
    found: list[Path] = []
    for path in given:
        found += sorted(path.glob("*.json")) if path.is_dir() else [path]
    return found


def sheet_files(files: Iterable[Path], stock: Range, make: Make, *, logo: bytes | None = None) -> Iterator[Written]:
    """Yield the sheet of each visit file as PDF, or as a page that stands alone where no PDF can be made.

    Two files of one name in different folders get sheets of different names.
    """
    ending = "pdf" if is_available() else "html"
    taken: dict[str, int] = {}
    for file in files:
        taken[file.stem] = taken.get(file.stem, 0) + 1
        count = taken[file.stem]
        name = f"{file.stem}.{ending}" if count == 1 else f"{file.stem}-{count}.{ending}"
        try:
            html = make(read_visit(file), stock)
            content = write_pdf(html, logo=logo) if ending == "pdf" else standing_alone(html, logo=logo).encode()
        except TwolightError as error:
            told = str(error) if isinstance(error, Faults) else f"{file}: {error}"
            yield Written(file, name, problem=told)
        else:
            yield Written(file, name, content)
