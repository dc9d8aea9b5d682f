"""Finds the texts that people are shown in the tables of ``data/`` for translation; called by pybabel."""

import tomllib
from collections.abc import Iterator, Sequence
from typing import IO, Any

Message = tuple[int, str | None, str, Sequence[str]]


def extract(file: IO[bytes], _keywords: Any, _tags: Any, options: Any = None) -> Iterator[Message]:
    """Yield the line and the text of everything in a table that people are shown, as pybabel wants it.

    The option ``shown`` lists the fields of a row that people are shown.
    """
    shown = str((options or {}).get("shown", "text label source")).split()
    content = file.read().decode("utf-8")
    lines = content.splitlines()
    for rows in tomllib.loads(content).values():
        for row in rows if isinstance(rows, list) else ():
            for name in shown:
                if name in row:
                    place = next(
                        k
                        for k, line in enumerate(lines, start=1)
                        if line.startswith(f"{name} = ") and row[name] in line
                    )
                    yield place, None, row[name], ()
