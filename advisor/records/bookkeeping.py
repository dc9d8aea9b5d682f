"""The part of the records' door for what the shop owes its wearers: what was done, what is old, erasing for good."""

from collections.abc import Sequence
from contextlib import AbstractContextManager
from pathlib import Path

from sqlalchemy import Connection, Engine, exc

from advisor.records import drafts, erasing, events, rechecks, visits
from advisor.records.backup import Backup, write_backup
from advisor.records.drafts import SavedDraft
from advisor.records.erasing import Erased, OldVisits
from advisor.records.events import Event, EventKey, What
from advisor.records.rechecks import SavedRecheck
from advisor.records.visits import SavedVisit


class Bookkeeping:
    """What a Store does beside saving and finding; it lends the connections."""

    _engine: Engine
    place: str

    def _reading(self) -> AbstractContextManager[Connection]:
        raise NotImplementedError

    def _writing(self) -> AbstractContextManager[Connection]:
        raise NotImplementedError

    def record_event(self, what: What, *, who: str = events.HERE, visit_id: str | None = None) -> Event:
        """Write down that something was done; of a visit that has been erased meanwhile, without the link."""
        try:
            with self._writing() as connection:
                return events.add(connection, what, who=who, visit_id=visit_id)
        except exc.IntegrityError:
            with self._writing() as connection:
                return events.add(connection, what, who=who)

    def list_events(
        self, *, visit_id: str | None = None, limit: int = 50, after: EventKey | None = None
    ) -> list[Event]:
        """Return what was done, the last first: of one visit, or of everything."""
        with self._reading() as connection:
            return events.page(connection, visit_id=visit_id, limit=limit, after=after)

    def last_event(self, what: What, *, visit_id: str) -> Event | None:
        """Return when something was last done with a visit, or None where it was not, or too long ago."""
        with self._reading() as connection:
            return events.last(connection, what, visit_id=visit_id)

    def note_order(self, visit_json: str, *, visit_id: str, edit_seen: int, who: str = events.HERE) -> SavedVisit:
        """Store into a visit what was ordered; raises VisitChanged or VisitMissing as saving does."""
        with self._writing() as connection:
            return visits.note_order(connection, visit_json, over=(visit_id, edit_seen), who=who)

    def rechecks_leading_to(self, visit_id: str) -> list[SavedRecheck]:
        """Return the records of return visits whose new order is this visit, the last first."""
        with self._reading() as connection:
            return rechecks.leading_to(connection, visit_id)

    def link_recheck(self, recheck_id: str, *, new_visit_id: str, who: str = events.HERE) -> SavedRecheck:
        """Say which visit is the new order that came of a return visit.

        Raises RecheckMissing or VisitMissing, or OwnOrder where it is the visit that was rechecked.
        """
        with self._writing() as connection:
            return rechecks.link(connection, recheck_id, new_visit_id=new_visit_id, who=who)

    def list_drafts(self) -> list[SavedDraft]:
        """Return every form in progress."""
        with self._reading() as connection:
            return drafts.every(connection)

    def count_of(self, visit_ids: Sequence[str], draft_ids: Sequence[str] = ()) -> Erased:
        """Return how much would go with these visits and forms."""
        with self._reading() as connection:
            return erasing.counted(connection, visit_ids, draft_ids)

    def erase(self, visit_ids: Sequence[str], *, draft_ids: Sequence[str] = (), who: str = events.HERE) -> Erased:
        """Erase visits with their return visits and forms, and further forms; what is gone already is no error."""
        with self._writing() as connection:
            gone = erasing.erase(connection, visit_ids, draft_ids=draft_ids, who=who)
        erasing.settle(self._engine, place=self.place)
        return gone

    def old_visits(self, *, before_day: str, limit: int = 50) -> OldVisits:
        """Return the visits of before a day (as ``2026-12-01``) that were neither changed nor rechecked since."""
        with self._reading() as connection:
            return erasing.old(connection, before_day=before_day, limit=limit)

    def erase_old(self, visit_ids: Sequence[str], *, before_day: str, who: str = events.HERE) -> Erased:
        """Erase those of these visits that are still old; one that was touched meanwhile stays."""
        with self._writing() as connection:
            still_old = erasing.old_among(connection, visit_ids, before_day=before_day)
            gone = erasing.erase(connection, still_old, who=who)
        erasing.settle(self._engine, place=self.place)
        return gone

    def backup(self, file: Path, *, replace: bool = False) -> Backup:
        """Write everything there is now into one file while others go on; see ``backup.write_backup``."""
        return write_backup(self._engine, file, place=self.place, replace=replace)
