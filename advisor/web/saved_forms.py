"""Which visit each form became, so that a form sent twice is saved once."""

from threading import Lock

from advisor.records.visits import SavedVisit

MOST_REMEMBERED = 500


class SavedForms:
    """Visits by the token of the form they were saved from, with the edit saved; the oldest are forgotten.

    Hold ``lock`` from looking up to remembering: two answers may be in the making at once.
    """

    def __init__(self) -> None:
        self.lock = Lock()
        self._visits: dict[str, tuple[str, int]] = {}

    def remember(self, token: str, saved: SavedVisit) -> None:
        """Note what a form was saved as."""
        self._visits.pop(token, None)
        self._visits[token] = (saved.id, saved.edit)
        while len(self._visits) > MOST_REMEMBERED:
            self._visits.pop(next(iter(self._visits)))

    def find(self, token: str) -> tuple[str, int] | None:
        """Return the visit that a form became, and its edit then."""
        return self._visits.get(token)
