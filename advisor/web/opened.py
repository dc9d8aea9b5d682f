"""Papers opened are written down, as a server writes its log: nothing that anybody entered changes by it."""

import sys

from advisor.records.events import What
from advisor.records.trouble import StoreError
from advisor.web.desk import current_desk
from advisor.web.operators import current_operator

PAPERS: dict[str, What] = {"sheet": "sheet", "care": "care", "order": "order", "bench": "bench"}
NOT_NOTED = "twolight: a paper was opened, but that could not be written down: %s"


def note_opened(paper: str, visit_id: str) -> None:
    """Write down that a paper of a visit was opened; where there is no room for it, print all the same and say so."""
    try:
        current_desk().store.record_event(PAPERS[paper], who=current_operator(), visit_id=visit_id)
    except StoreError as error:
        print(NOT_NOTED % type(error).__name__, file=sys.stderr)
