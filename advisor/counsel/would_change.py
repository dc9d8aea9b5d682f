"""What would change the advice: questions not asked, other priorities, a higher limit, what the figures leave out."""

from collections.abc import Iterator

from advisor.counsel.advise import Counsel, Field
from advisor.counsel.cautions import MULTIFOCAL, is_unsteady
from advisor.counsel.choices import Option
from advisor.counsel.laid_out import Laid, lay_out_options
from advisor.counsel.musts import currency_of
from advisor.counsel.phrases import Figure, Phrase
from advisor.counsel.pool import is_dark
from advisor.counsel.reasons import MOST, Label
from advisor.counsel.value import criteria

ASPHERIC_FROM_D = 5.0  # plus; common practice, no source


def would_change(counsel: Counsel, label: Label) -> list[Phrase]:
    """Return what would change the advice: questions not asked, another order of priorities, a higher limit."""
    field, k = counsel.field, counsel.recommended
    found: list[Phrase] = []
    if counsel.least_price is not None:
        figures: dict[str, Figure] = {"price": counsel.least_price, "currency": currency_of(field.case)}
        found.append(Phrase("if-limit-raised", figures))
    if counsel.pairs:
        found += _one_pair(field)
    if k is not None:
        found += [*_left_out(field, field.pool.laid[k]), *_unasked(counsel, k, label)]
    for key, other in counsel.if_first[:MOST]:
        found.append(Phrase("if-first", {"criterion": criteria()[key].label, "label": label(field, other)}))
    return found


def _one_pair(field: Field) -> Iterator[Phrase]:
    """Yield what would let one pair do where two are proposed."""
    broken = {phrase.code: phrase.figures for phrases in field.broken.values() for phrase in phrases}
    if "fitting-height" in broken:
        yield Phrase("if-frame-taller", {"least_height_mm": broken["fitting-height"]["least_height_mm"]})
    if "near-imbalance" in broken:
        yield Phrase("if-prescriber-agrees")


def _unasked(counsel: Counsel, k: int, label: Label) -> Iterator[Phrase]:
    """Yield the questions that were not asked and might change this very advice: not asked is not never."""
    field = counsel.field
    case, laid = field.case, field.pool.laid[k]
    if not laid.material.tough:
        if case.life("impact") == "not-asked":
            yield Phrase("if-asked-impact")
        if case.life("one_good_eye") == "not-asked":
            yield Phrase("if-asked-one-eye")
        if case.youngest_age is None and case.life("child") == "not-asked":
            yield Phrase("if-asked-child")
    if case.life("night_driving") == "not-asked" and "second-image" in field.levels:
        yield Phrase("if-asked-night")
    life, cheapest = case.visit.daily_life, counsel.cheapest
    if (life is None or life.price_limit is None) and cheapest not in (None, k):
        price = field.pool.laid[cheapest].price
        figures: dict[str, Figure] = {"label": label(field, cheapest), "price": price, "currency": currency_of(case)}
        yield Phrase("if-asked-price", figures)
    least = laid.design.least_height_mm
    if least is not None and case.is_default("fitting.right.height_mm") and case.is_default("fitting.left.height_mm"):
        yield Phrase("if-height-measured", {"least_height_mm": least})


def _left_out(field: Field, laid: Laid) -> Iterator[Phrase]:
    """Yield what speaks for another kind of pair and is not weighed."""
    case, designs, tint = field.case, field.case.stock.design, laid.tint
    first = case.life("first_multifocal") == "yes" and is_unsteady(case)
    if laid.design.kind in MULTIFOCAL and (first or case.life("falls") == "yes"):
        yield _two_pairs(field, laid)
    strongest = max(max(power.sphere_d, power.sphere_d + power.cylinder_d) for power in laid.powers)
    flatter = any(design.kind == laid.design.kind and design.form == "aspheric" for design in designs)
    if strongest >= ASPHERIC_FROM_D and laid.design.form == "spherical" and flatter:
        yield Phrase("compare-aspheric")
    glare = case.life("sun") == "often" and (case.life("water_salt_chlorine") == "often" or case.says("driving"))
    sold = any(other.kind == "polarising" for other in case.stock.tint)
    if glare and sold and tint is not None and tint.kind != "polarising" and is_dark(tint):
        yield Phrase("if-polarising")


def _two_pairs(field: Field, laid: Laid) -> Phrase:
    """Return the proposal of a distance pair and a reading pair of the same lenses, priced where both are sold."""
    prices = [_price_as(field, laid, kind) for kind in ("single-vision", "reading")]
    known = [price for price in prices if price is not None]
    if len(known) < len(prices):
        return Phrase("if-two-pairs-unpriced")
    return Phrase("if-two-pairs", {"price": sum(known), "currency": currency_of(field.case)})


def _price_as(field: Field, laid: Laid, kind: str) -> float | None:
    """Return the price of the same lens in the cheapest design of a kind, None where there is none or it is unknown."""
    kept = laid.option.model_copy(update={"front_power_d": None, "centre_mm": None})
    designs = [design.key for design in field.case.stock.design if design.kind == kind]
    options: list[Option] = [kept.model_copy(update={"design": key}) for key in designs]
    priced = [option.price for option in lay_out_options(field.case, options) if not option.refused]
    return min((price for price in priced if price is not None), default=None)
