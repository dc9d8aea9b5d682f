"""The records of a shop: the one door through which the rest of the program reads and writes them."""

import binascii
import json
import zlib
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from types import TracebackType

from sqlalchemy import Connection, Engine, exc

from advisor.records import drafts, events, finding, ranges, rechecks, saved_forms, server, visits
from advisor.records.bookkeeping import Bookkeeping
from advisor.records.drafts import SavedDraft
from advisor.records.engine import make_private, sqlite_engine
from advisor.records.location import database_file
from advisor.records.ranges import RangeVersion
from advisor.records.rechecks import SavedRecheck
from advisor.records.saved_forms import SentForm
from advisor.records.schema import bring_up_to_date
from advisor.records.trouble import StoreUnreadable, explained
from advisor.records.visits import Made, PageKey, SavedVisit, VisitLine, VisitMissing


class Store(Bookkeeping):
    """Visits, drafts, ranges and settings; safe to share between threads.

    Errors are subclasses of :class:`advisor.records.trouble.StoreError`, one for each reason.
    """

    def __init__(self, engine: Engine, place: str) -> None:
        self._engine = engine
        self._reader = server.reading(engine)
        self._writer = engine.execution_options(writing=True)
        self.place = place

    @classmethod
    def open(cls, place: Path | str) -> "Store":
        """Open the records in a data folder or at a database URL, making or upgrading the tables first."""
        if isinstance(place, str) and server.is_address(place):
            address = server.address_of(place)
            name, engine = server.shown(address), server.server_engine(address)
        else:
            file = database_file(Path(place).absolute())
            name, engine = str(file), sqlite_engine(file)
            with explained(name):
                make_private(file)
        try:
            with explained(name):
                bring_up_to_date(engine, place=name)
        except BaseException:
            engine.dispose()
            raise
        return cls(engine, name)

    def close(self) -> None:
        """Close every connection; whatever was saved stays saved."""
        self._engine.dispose()

    def __enter__(self) -> "Store":
        return self

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        self.close()

    @contextmanager
    def _reading(self) -> Iterator[Connection]:
        with explained(self.place), self._damage_told(), self._reader.begin() as connection:
            yield connection

    @contextmanager
    def _writing(self) -> Iterator[Connection]:
        with explained(self.place), self._damage_told(), self._writer.begin() as connection:
            yield connection

    @contextmanager
    def _damage_told(self) -> Iterator[None]:
        """Say of a row whose content cannot be unpacked or read that the records are damaged."""
        try:
            yield
        except (zlib.error, json.JSONDecodeError, UnicodeDecodeError, binascii.Error) as error:
            raise StoreUnreadable(self.place) from error

    def save_visit(
        self,
        visit_json: str,
        *,
        range_toml: str,
        version: str,
        answer_json: str,
        visit_id: str | None = None,
        edit_seen: int | None = None,
        form: SentForm | None = None,
        who: str = events.HERE,
    ) -> SavedVisit:
        """Save a new visit, or save over the edit of ``visit_id`` that the editor saw; with ``form``, once for a form.

        Raises
        ------
        VisitChanged
            If it has been saved since; it carries the stored visit.
        VisitMissing
            If it has been erased since.
        DraftChanged
            If the form's draft was changed by another window.
        """
        if (visit_id is None) != (edit_seen is None):
            raise ValueError("visit_id and edit_seen go together: give both or neither")
        over = None if visit_id is None or edit_seen is None else (visit_id, edit_seen)
        try:
            return self._save(visit_json, range_toml, version, answer_json, over, form, who)
        except exc.IntegrityError:  # a server lets the same form in twice at once: the later of the two looks again
            return self._save(visit_json, range_toml, version, answer_json, over, form, who)

    def _save(
        self,
        visit_json: str,
        range_toml: str,
        version: str,
        answer_json: str,
        over: tuple[str, int] | None,
        form: SentForm | None,
        who: str,
    ) -> SavedVisit:
        with self._writing() as connection:
            made = Made(visit_json, ranges.keep(connection, range_toml), version, answer_json, who)
            if form is not None:
                return saved_forms.save(connection, made, form=form, over=over)
            return visits.add(connection, made) if over is None else visits.change(connection, made, over=over)

    def visit_of_draft(self, draft_id: str) -> str | None:
        """Return the visit that a draft was saved as, if it was."""
        with self._reading() as connection:
            return saved_forms.visit_of_draft(connection, draft_id)

    def get_visit(self, visit_id: str) -> SavedVisit:
        """Return a visit, or raise VisitMissing."""
        with self._reading() as connection:
            return visits.find(connection, visit_id)

    def list_visits(self, search: str = "", *, limit: int = 50, after: PageKey | None = None) -> list[VisitLine]:
        """Return visits, the last changed first, in which every word of the search begins some word.

        Name, reference, note and date are searched without case or accents. The next page is asked for with the
        ``key`` of the last line.
        """
        with self._reading() as connection:
            return finding.page(connection, search, limit=limit, after=after)

    def erase_visit(self, visit_id: str) -> None:
        """Erase a visit and the drafts that began from it, or raise VisitMissing."""
        if not self.erase([visit_id]).visits:
            raise VisitMissing

    def save_recheck(
        self,
        content_json: str,
        *,
        visit_id: str,
        outcome: str,
        who_pays: str,
        new_visit_id: str | None = None,
        recheck_id: str | None = None,
        who: str = events.HERE,
    ) -> SavedRecheck:
        """Record what came of a return visit; sent twice under one ``recheck_id`` it is recorded once.

        Raises VisitMissing where the visit, or the visit of the new order, is not there.
        """

        def record() -> SavedRecheck:
            with self._writing() as connection:
                return rechecks.add(
                    connection,
                    content_json,
                    visit_id=visit_id,
                    outcome=outcome,
                    who_pays=who_pays,
                    new_visit_id=new_visit_id,
                    recheck_id=recheck_id,
                    who=who,
                )

        try:
            return record()
        except exc.IntegrityError:  # as above, or the visit was erased at this very moment
            return record()

    def get_recheck(self, recheck_id: str) -> SavedRecheck:
        """Return a recorded outcome, or raise RecheckMissing."""
        with self._reading() as connection:
            return rechecks.find(connection, recheck_id)

    def list_rechecks(self, visit_id: str) -> list[SavedRecheck]:
        """Return what was recorded of a visit, the last first."""
        with self._reading() as connection:
            return rechecks.of_visit(connection, visit_id)

    def save_draft(
        self,
        fields_json: str,
        *,
        draft_id: str | None = None,
        edit_seen: int | None = None,
        visit_id: str | None = None,
        visit_edit: int | None = None,
    ) -> SavedDraft:
        """Save a new draft, or save over ``draft_id``; with a new one, those left lying for long are dropped.

        ``visit_id`` and ``visit_edit`` are taken when the draft is new. With ``edit_seen`` a draft that was changed
        elsewhere raises DraftChanged; without it the last save counts. One that is gone raises DraftMissing.
        """
        with self._writing() as connection:
            if draft_id is None:
                return drafts.add(connection, fields_json, visit_id=visit_id, visit_edit=visit_edit)
            return drafts.change(connection, fields_json, draft_id=draft_id, edit_seen=edit_seen)

    def get_draft(self, draft_id: str) -> SavedDraft:
        """Return a draft, or raise DraftMissing."""
        with self._reading() as connection:
            return drafts.find(connection, draft_id)

    def delete_draft(self, draft_id: str) -> None:
        """Remove a draft; one that is not there is no error."""
        with self._writing() as connection:
            drafts.erase(connection, draft_id)

    def set_range(self, toml: str, *, who: str = events.HERE, logo: bytes | None = None) -> str:
        """Make this text the shop's range from now on; return its hash. Visits keep the range they were made with.

        A ``logo`` is stored with it: None leaves the one there is, and an empty one takes it away.
        """
        with self._writing() as connection:
            key = ranges.keep(connection, toml)
            ranges.set_setting(connection, ranges.CURRENT, key)
            if logo is not None:
                ranges.set_logo(connection, logo)
            events.add(connection, "range-changed", who=who)
            return key

    def current_range(self) -> RangeVersion | None:
        """Return the shop's range, or None where it has saved none."""
        with self._reading() as connection:
            key = ranges.setting(connection, ranges.CURRENT)
            return ranges.find(connection, key) if key else None

    def get_range(self, key: str) -> RangeVersion | None:
        """Return the range of this hash."""
        with self._reading() as connection:
            return ranges.find(connection, key)

    def get_logo(self) -> bytes | None:
        """Return the shop's logo as PNG, or None where it has none."""
        with self._reading() as connection:
            return ranges.logo(connection)

    def get_setting(self, key: str) -> str | None:
        """Return a setting."""
        with self._reading() as connection:
            return ranges.setting(connection, key)

    def set_setting(self, key: str, value: str) -> None:
        """Store a setting over the one before."""
        with self._writing() as connection:
            ranges.set_setting(connection, key, value)
