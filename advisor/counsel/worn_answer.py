"""The worn pair as the answer writes it: what it is, how it is worked out, what is missing, and its figures."""

from advisor.counsel.answer import Content, Figures, eyes_answer, label_of, notice
from advisor.counsel.laid_out import NOTE_TEXTS
from advisor.counsel.names import coating_name, material_name
from advisor.counsel.phrases import Phrase, Translator, mark
from advisor.counsel.stock_items import Coating
from advisor.counsel.worn import WornPair
from advisor.optics.thickness import Refusal

BASIS_TEXTS: dict[str, str] = {
    "worn-own-own": mark("As single vision at its own prescription and fitting, in the present frame's shape."),
    "worn-own-today": mark(
        "As single vision at its own prescription and today's fitting, in the present frame's shape."
    ),
    "worn-today-own": mark(
        "As single vision, worked out at today's prescription and its own fitting, in the present frame's shape."
    ),
    "worn-today-today": mark(
        "As single vision, worked out at today's prescription and fitting, in the present frame's shape."
    ),
    "worn-no-material": mark("Say the worn pair's material to see it beside."),
    "worn-no-coating": mark("Say its coating to see what it mirrors."),
    "worn-coating-unfit": mark(
        "No built-in film can stand for its coating's declared figure, so nothing it mirrors is worked out."
    ),
    "worn-no-form": mark("Its curves do not reach the rim of the present frame, so its form is not worked out."),
}


def worn_answer(pair: WornPair, *, figures: Figures | None, translator: Translator) -> Content:
    """Return the worn pair as the answer writes it; ``figures`` are its own, None without its material."""
    laid = pair.laid
    made = figures is not None and bool((figures.forms.shape.refusal == Refusal.NONE).all())
    content: Content = {
        "label": _label(pair, translator),
        "design": None if laid is None else laid.design.key,
        "material": None if laid is None else laid.material.key,
        "coating": _on_faces(pair, [coating.key for coating in _faces(pair)]),
        "prescription": None if laid is None else _whose(pair.worn.prescription),
        "fitting": None if laid is None else _whose(pair.worn.fitting),
        "basis": [notice(phrase, BASIS_TEXTS, translator) for phrase in _basis(pair, made=made)],
        "notes": [notice(phrase, NOTE_TEXTS, translator) for phrase in (laid.notes if laid else ())],
    }
    if made and laid is not None and figures is not None:
        content |= eyes_answer(laid, figures=figures, with_light=pair.mirrors)
    return content


def _whose(part: object) -> str:
    return "today" if part is None else "own"


def _faces(pair: WornPair) -> tuple[Coating, ...]:
    """Return the coatings of front and back, or nothing where they are not known."""
    if pair.worn.coating is None:
        return ()
    return pair.case.stock.faces_of(pair.worn.coating) if pair.laid is None else (pair.laid.front, pair.laid.back)


def _on_faces(pair: WornPair, names: list[str]) -> Content | None:
    return dict(zip(("front", "back"), names, strict=True)) if pair.worn.coating is not None else None


def _label(pair: WornPair, translator: Translator) -> str:
    """Return what the pair is made of, and what of it is not known."""
    laid = pair.laid
    if laid is None:
        names = dict.fromkeys(coating_name(coating, translator) for coating in _faces(pair))
        return translator.gettext(mark("material not known, %(coating)s")) % {"coating": " / ".join(names)}
    if pair.worn.coating is None:
        return translator.gettext(mark("%(material)s, coating not known")) % {
            "material": material_name(laid.material, translator)
        }
    return label_of(laid, translator)


def _basis(pair: WornPair, *, made: bool) -> list[Phrase]:
    """Say how the pair is worked out, then what is missing for the rest."""
    if pair.laid is None:
        return [Phrase("worn-no-material")]
    found = [Phrase(f"worn-{_whose(pair.worn.prescription)}-{_whose(pair.worn.fitting)}")]
    if not made:
        return [*found, Phrase("worn-no-form")]
    if pair.worn.coating is None:
        found.append(Phrase("worn-no-coating"))
    elif not pair.mirrors:
        found.append(Phrase("worn-coating-unfit"))
    return found
