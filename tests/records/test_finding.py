"""Visits found by the beginnings of words: the same ones, in the same order, whichever way they are looked up."""

import json
import random

import pytest
from sqlalchemy import event

from advisor.records import finding
from advisor.records.store import Store
from tests.databases import Place, rows

FIRST = ("Ada", "Adele", "Bea", "Ben", "Bernd", "Cy")
LAST = ("Abel", "Berg", "Bergmann", "Dahl")
NOTES = ("drives at night", "thin rims", "anders", "")
SEARCHES = (
    "",
    "a",
    "ad",
    "ada",
    "ada b",
    "berg a",
    "bergm",
    "be be",
    "b c",
    "d",
    "2026-12-0",
    "2026 thin",
    "x",
    "drives ad",
)


def fill(store: Store) -> list[tuple[str, str]]:
    """Save forty visits; return of each its identifier and what is searched, the last saved first."""
    pick = random.Random(7)  # noqa: S311 - wearers, not secrets
    saved = []
    for _ in range(40):
        name, note = f"{pick.choice(FIRST)} {pick.choice(LAST)}", pick.choice(NOTES)
        date = f"2026-12-{pick.randint(1, 28):02d}"
        content = json.dumps({"date": date, "note": note, "wearer": {"name": name}})
        visit = store.save_visit(content, range_toml="abc", version="0", answer_json="{}")
        saved.append((visit.id, f"{name} {note} {date}".lower()))
    return saved[::-1]


def expected(saved: list[tuple[str, str]], search: str) -> list[str]:
    """Return what a search finds, worked out without an index."""
    wanted = search.split()
    return [
        key
        for key, text in saved
        if all(any(word.startswith(beginning) for word in text.split()) for beginning in wanted)
    ]


@pytest.mark.parametrize(
    ("few", "latest"),
    [(1000, 1000), (0, 1000), (0, 12), (5, 7)],
    ids=["every word is rare", "found among the latest", "beyond the latest", "each in turn"],
)
def test_every_way_of_looking_finds_the_same_visits_page_by_page(
    store: Store, monkeypatch: pytest.MonkeyPatch, few: int, latest: int
) -> None:
    monkeypatch.setattr(finding, "FEW", few)
    monkeypatch.setattr(finding, "LATEST", latest)
    saved = fill(store)
    for search in SEARCHES:
        found: list[str] = []
        key = None
        while page := store.list_visits(search, limit=3, after=key):
            found += [line.id for line in page]
            key = page[-1].key
        assert found == expected(saved, search), search


def test_a_changed_visit_is_found_by_its_new_words_alone(store: Store) -> None:
    visit = store.save_visit('{"note": "old words"}', range_toml="abc", version="0", answer_json="{}")
    change = '{"note": "new words"}'
    store.save_visit(change, range_toml="abc", version="0", answer_json="{}", visit_id=visit.id, edit_seen=1)
    assert [len(store.list_visits(search)) for search in ("old", "new", "words")] == [0, 1, 1]


def test_of_a_long_note_the_first_sixty_words_are_searched(store: Store) -> None:
    note = " ".join(f"w{number}" for number in range(100))
    store.save_visit(json.dumps({"note": note}), range_toml="abc", version="0", answer_json="{}")
    assert [len(store.list_visits(word)) for word in ("w0", "w59", "w60")] == [1, 1, 0]


def test_a_word_longer_than_any_column_is_found_by_its_beginning(store: Store) -> None:
    store.save_visit(json.dumps({"note": "x" * 500}), range_toml="abc", version="0", answer_json="{}")
    assert [len(store.list_visits("x" * length)) for length in (1, 40, 500)] == [1, 1, 1]


@pytest.mark.parametrize("search", ["a\0b", "\0", "\U0010ffff", "a" * 200, "%", "'; DROP TABLE visit; --"])
def test_a_search_that_no_name_can_answer_finds_nothing(store: Store, search: str) -> None:
    store.save_visit('{"note": "a b"}', range_toml="abc", version="0", answer_json="{}")
    assert store.list_visits(search) == []


def test_words_are_sorted_by_code_point_on_a_server_too(place: Place, store: Store) -> None:
    store.save_visit('{"note": "b B-1 Z a1 9 éa"}', range_toml="abc", version="0", answer_json="{}")
    found = [row.word for row in rows(place, "SELECT word FROM visit_word WHERE word NOT LIKE '20%' ORDER BY word")]
    assert found == ["9", "a1", "b", "b-1", "ea", "z"]
    if isinstance(place, str):
        query = "SELECT collation_name FROM information_schema.columns WHERE table_name = 'visit_word' ORDER BY 1"
        assert rows(place, query)[0] == ("C",)


@pytest.mark.parametrize("search", ["", "ada", "ada ben"])
def test_no_search_reads_every_visit(tmp_path: Place, monkeypatch: pytest.MonkeyPatch, search: str) -> None:
    monkeypatch.setattr(finding, "FEW", 0)  # every step is taken
    asked: list[tuple[str, object]] = []
    with Store.open(tmp_path) as store:
        event.listen(store._engine, "before_cursor_execute", lambda *given: asked.append((given[2], given[3])))
        store.list_visits(search)
        plans = [
            row[-1]
            for statement, values in list(asked)
            for row in store._engine.raw_connection().execute(f"EXPLAIN QUERY PLAN {statement}", values)
        ]
    assert plans
    assert [step for step in plans if step.startswith("SCAN visit") and "USING" not in step] == []
