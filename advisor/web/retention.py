"""Old visits: older than the shop keeps them for. They are shown, and erased when somebody says so; never by itself."""

import calendar
import datetime as dt

from flask import Blueprint, make_response, redirect, render_template, request, url_for
from werkzeug.wrappers import Response as AnyResponse

from advisor.web.desk import current_desk
from advisor.web.operators import current_operator
from advisor.web.stock_loader import current_shelf

retention = Blueprint("retention", __name__)

AT_ONCE = 200  # so many are listed, and no more are erased than were listed


def months_before(day: dt.date, months: int) -> dt.date:
    """Return the same day so many months earlier, or the last day of that month where it has no such day."""
    month = day.year * 12 + day.month - 1 - months
    year, month = month // 12, month % 12 + 1
    return dt.date(year, month, min(day.day, calendar.monthrange(year, month)[1]))


def _months() -> int | None:
    return current_shelf(current_desk().store).stock.shop.retention_months


@retention.get("/visits/old")
def listing() -> str:
    """Show how many visits are older than the shop keeps them for, and the oldest of them."""
    return _page()


def _page(*, none: bool = False, stayed: int = 0) -> str:
    months = _months()
    before = None if months is None else months_before(dt.date.today(), months)
    found = None if before is None else current_desk().store.old_visits(before_day=before.isoformat(), limit=AT_ONCE)
    oldest = None if found is None or found.oldest is None else dt.date.fromisoformat(found.oldest)
    return render_template(
        "old_visits.html",
        months=months,
        before=before,
        found=found,
        oldest=oldest,
        nothing_ticked=none,
        stayed=stayed,
    )


@retention.post("/visits/old/erase")
def erase() -> AnyResponse:
    """Say what would go; erase what was ticked, as far as it is still old, once that has been confirmed."""
    months, ids = _months(), request.form.getlist("visit")[:AT_ONCE]
    if months is None or not ids:
        return make_response(_page(none=True), 422)
    store = current_desk().store
    if request.form.get("confirmed") != "yes":
        return make_response(
            render_template("erase.html", back="/visits/old", ids=ids, forms=False, goes=store.count_of(ids))
        )
    before = months_before(dt.date.today(), months).isoformat()
    store.erase_old(ids, before_day=before, who=current_operator())
    stayed = store.count_of(ids).visits
    if stayed:
        return make_response(_page(stayed=stayed), 409)
    return redirect(url_for("wearer.erased"), 303)
