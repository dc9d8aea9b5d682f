"""Records with something in every table, and everything that records hold, for tests of copies of them."""

import json
from pathlib import Path
from typing import Any

from sqlalchemy import select

from advisor.records import tables
from advisor.records.saved_forms import SentForm
from advisor.records.store import Store
from tests.databases import Place, engine_at

NAME = "Żaneta Ångström-O’Neil 林"


def visit_text(reference: str) -> str:
    """Return a visit with letters of many alphabets and more text than one page of a file holds."""
    visit = {"format": "twolight-visit-1", "date": "2026-12-01", "reference": reference, "wearer": {"name": NAME}}
    return json.dumps(visit | {"note": f"note of {reference}, " * 300}, ensure_ascii=False)


def fill(store: Store, visits: int = 12) -> None:
    """Put rows into every table, with links between them and links that are left empty."""
    saved = [
        store.save_visit(
            visit_text(f"A-{k}"),
            range_toml=f"key = {k % 3}",
            version="0.1.0",
            answer_json=json.dumps({"options": [k] * 500}),
            form=SentForm(f"{k:032x}"),
        )
        for k in range(visits)
    ]
    store.save_draft('{"fields": {"sphere": "−4,25"}}', visit_id=saved[0].id, visit_edit=1)
    store.save_draft('{"fields": {}}')
    for new in (None, saved[2].id):
        store.save_recheck(
            '{"says": "ghosts"}', visit_id=saved[1].id, outcome="remake", who_pays="maker", new_visit_id=new
        )
    store.set_range("key = 9")
    store.set_setting("first-run", "dismissed")
    store.record_event("exported", visit_id=saved[3].id)


def everything(place: Place) -> dict[str, set[tuple[Any, ...]]]:
    """Return every row of every table."""
    engine = engine_at(place)
    try:
        with engine.connect() as connection:
            return {
                table.name: {tuple(row) for row in connection.execute(select(table))}
                for table in tables.metadata.sorted_tables
            }
    finally:
        engine.dispose()


def in_folder(file: Path, folder: Path) -> Path:
    """Lay a backup into a folder as its records, as a hand would, and return the folder."""
    folder.mkdir()
    (folder / "twolight.sqlite3").write_bytes(file.read_bytes())
    return folder
