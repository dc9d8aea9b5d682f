"""First steps: what a shop without visits does first, each done, skipped or still open."""

from dataclasses import dataclass

from flask import Blueprint, abort, redirect, request, url_for
from werkzeug.wrappers import Response as AnyResponse

from advisor.counsel.phrases import mark
from advisor.counsel.stock import Range, builtin_range
from advisor.records.store import Store
from advisor.web.desk import current_desk
from advisor.web.stock_loader import current_shelf

first_run = Blueprint("first_run", __name__)

SETTING = "first-run"
DISMISSED, SKIPPED, TRIED = "dismissed", "skipped", "tried"


@dataclass(frozen=True)
class Step:
    """One thing to do first: its words, where it is done, and how it stands."""

    key: str
    words: str
    link: str
    address: str
    is_done: bool = False
    is_skipped: bool = False


# Words and the link that leads there.
STEPS: tuple[Step, ...] = (
    Step(
        "shop",
        mark("Say what your shop is called, how it is reached, its region and its currency."),
        mark("Your shop"),
        "/range/shop",
    ),
    Step(
        "range",
        mark("Look at what you sell. The prices are invented until you put in your own."),
        mark("What you sell"),
        "/range",
    ),
    Step("demo", mark("Open a demo wearer to see a whole comparison."), mark("Choose a demo wearer"), "#wearer"),
    Step(
        "spheres",
        mark("Type your first two spheres; figures appear at once."),
        mark("Right sphere"),
        "#prescription.right.sphere",
    ),
)
KEYS = tuple(step.key for step in STEPS)


def first_steps() -> tuple[Step, ...]:
    """Return the steps as they stand; none once a visit is saved, all is done or skipped, or they were put away."""
    store = current_desk().store
    if store.get_setting(SETTING) == DISMISSED or store.list_visits(limit=1):
        return ()
    done = _done(store)
    found = tuple(_standing(store, step, is_done=step.key in done) for step in STEPS)
    return () if all(step.is_done or step.is_skipped for step in found) else found


def _standing(store: Store, step: Step, *, is_done: bool) -> Step:
    skipped = store.get_setting(_key(step.key)) == SKIPPED
    return Step(step.key, step.words, step.link, step.address, is_done=is_done, is_skipped=skipped and not is_done)


def _key(step: str) -> str:
    return f"{SETTING}.{step}"


def _done(store: Store) -> set[str]:
    """Return the steps that facts show to be done."""
    stock = current_shelf(store).stock
    found = {"shop"} if stock.shop.name else set()
    found |= {"range"} if _without_shop(stock) != _without_shop(builtin_range()) else set()
    return found | ({"demo"} if store.get_setting(_key("demo")) == TRIED else set())


def _without_shop(stock: Range) -> Range:
    return stock.model_copy(update={"shop": builtin_range().shop})


def demo_was_tried(store: Store) -> None:
    """Remember that a demo wearer was opened."""
    store.set_setting(_key("demo"), TRIED)


@first_run.post("/first-run/skip")
def skip() -> AnyResponse:
    """Skip one step."""
    step = request.form.get("step", "")
    if step not in KEYS:
        abort(404)
    current_desk().store.set_setting(_key(step), SKIPPED)
    return redirect(url_for("counter.start", _anchor="first-run"), 303)


@first_run.post("/first-run/dismiss")
def dismiss() -> AnyResponse:
    """Put the first steps away for good."""
    current_desk().store.set_setting(SETTING, DISMISSED)
    return redirect(url_for("counter.start"), 303)
