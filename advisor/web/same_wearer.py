"""Which saved visits, and which forms in progress, seem to be one person's: the same name, and no other birth date."""

import json
import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import Any

from advisor.counsel.visit import Visit, parse_visit
from advisor.records.drafts import SavedDraft
from advisor.records.folding import fold
from advisor.records.store import Store
from advisor.records.visits import SavedVisit, VisitLine

PAGE = 200


@dataclass(frozen=True)
class Candidate:
    """A visit that seems to be of the same person; ``is_certain`` where the birth date or year says so too."""

    id: str
    date: str
    reference: str
    name: str
    born: str
    is_certain: bool
    rechecks: int


@dataclass(frozen=True)
class Person:
    """Who is looked for: a folded name, and what is known of the birth."""

    name: str
    birth_date: str
    birth_year: str

    def fits(self, other: "Person") -> bool:
        """Tell whether both may be one person: one name, and nothing known of the births that differs."""
        dates = {one.birth_date for one in (self, other)} - {""}
        years = {one.birth_year for one in (self, other)} - {""}
        return self.name == other.name and len(dates) < 2 and len(years) < 2

    def born_alike(self, other: "Person") -> bool:
        """Tell whether the birth date or year of both is known and the same."""
        return bool(self.birth_year) and self.birth_year == other.birth_year


def person_of(visit: Visit) -> Person:
    """Return the person that a visit names."""
    wearer = visit.wearer
    if wearer is None:
        return Person("", "", "")
    date = wearer.birth_date.isoformat() if wearer.birth_date else ""
    return Person(fold(wearer.name or ""), date, date[:4] or str(wearer.birth_year or ""))


def visits_like(store: Store, saved: SavedVisit) -> list[Candidate]:
    """Return the visit itself and, where it has a name, every other that seems to be of the same person."""
    person = person_of(parse_visit(saved.visit_json))
    found = [_candidate(store, saved, person)]
    for line in _of_name(store, person.name) if person.name else ():
        other = store.get_visit(line.id)
        if line.id != saved.id and person.fits(person_of(parse_visit(other.visit_json))):
            found.append(_candidate(store, other, person))
    return found


def _of_name(store: Store, name: str) -> Iterator[VisitLine]:
    after = None
    while lines := store.list_visits(name, limit=PAGE, after=after):
        yield from (line for line in lines if fold(line.name) == name)
        after = lines[-1].key


def _candidate(store: Store, saved: SavedVisit, person: Person) -> Candidate:
    visit = parse_visit(saved.visit_json)
    own = person_of(visit)
    return Candidate(
        saved.id,
        saved.date,
        visit.reference or "",
        (visit.wearer.name if visit.wearer else None) or "",
        own.birth_date or own.birth_year,
        person.born_alike(own),
        len(store.list_rechecks(saved.id)),
    )


def drafts_like(store: Store, saved: SavedVisit) -> list[SavedDraft]:
    """Return the forms in progress that hold the person's name, now or among what can be undone."""
    person = person_of(parse_visit(saved.visit_json))
    drafts = store.list_drafts() if person.name else []
    return [draft for draft in drafts if any(person.fits(one) for one in _persons(json.loads(draft.fields_json)))]


def _persons(kept: Mapping[str, Any]) -> Iterator[Person]:
    """Yield whom a form names: as it stands, and after each step back and each step on again."""
    fields = kept.get("fields", {})
    yield _typed_person(fields)
    for steps in (kept.get("before", ()), kept.get("after", ())):
        state = fields
        for step in reversed(steps):
            state = {**state, **step}
            yield _typed_person(state)


def _typed_person(fields: Mapping[str, str]) -> Person:
    """Return the person whom typed fields name; a birth date or year that cannot be read is not known."""
    date, year = (fields.get(f"wearer.{name}", "").strip() for name in ("birth_date", "birth_year"))
    date = date if re.fullmatch(r"\d{4}-\d\d-\d\d", date, re.ASCII) else ""
    year = year if re.fullmatch(r"\d{4}", year, re.ASCII) else ""
    return Person(fold(fields.get("wearer.name", "")), date, date[:4] or year)
