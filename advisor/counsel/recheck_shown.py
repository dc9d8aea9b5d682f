"""Causes and remedies as the answer shows them: words and figures of one lens in one language."""

from collections.abc import Mapping

from advisor.counsel.answer import notice
from advisor.counsel.comparison import Notice
from advisor.counsel.layout import VERDICTS
from advisor.counsel.phrases import Phrase, Translator, digits_for, mark, say
from advisor.counsel.recheck_answer import AsMade, Cause, Change, Finding, Remedy
from advisor.counsel.recheck_lens import OnFile
from advisor.counsel.recheck_remedies import OUTCOMES, Work, Worked
from advisor.counsel.recheck_table import CAUSES, told
from advisor.counsel.recheck_texts import CAUSES as CAUSE_TEXTS
from advisor.counsel.recheck_texts import FIGURES, REMEDIES, TESTS, WHY

STEPS = tuple(VERDICTS.values())
FINE_DIGITS = {"second_image_percent": 3}
TIMES = mark("%(times)s times")
AT_MOST = mark("at most %(figure)s")
EYES = {"right": mark("right"), "left": mark("left"), "both": mark("both eyes")}
OFF_FIGURES = {
    "sphere": "power_off_d", "meridian": "power_off_d", "cylinder": "cylinder_off_d", "axis": "axis_off_deg",
    "add": "add_off_d", "pd": "place_off_mm", "height": "place_off_mm", "centre": "thickness_off_mm",
    "horizontal-prism": "prism_off_prism_d", "vertical-prism": "prism_off_prism_d",
}  # fmt: skip


def reason(phrase: Phrase, texts: Mapping[str, str], translator: Translator) -> Notice:
    """Return a phrase as the answer shows it."""
    return Notice.model_validate(notice(phrase, texts, translator))


def figure_words(figure: str, value: float, translator: Translator) -> str:
    """Return one figure of a remedy with its unit; a verdict by its word, a level below 1 with two decimals."""
    if figure == "verdict_step":
        return translator.gettext(STEPS[round(value)])
    if figure == "behind_contrast_percent" and value >= 1000.0:
        return translator.gettext(TIMES) % {"times": translator.number(value / 100.0, digits=0)}
    digits = 2 if figure == "visibility_level" and value < 1.0 else FINE_DIGITS.get(figure, digits_for(figure))
    unit = FIGURES[figure][1]
    return _with_unit(translator.number(value, digits=digits), unit)


def _with_unit(number: str, unit: str) -> str:
    return f"{number}{unit}" if unit == "°" else f"{number} {unit}".rstrip()


def change(figure: str, before: float, after: float, translator: Translator) -> Change:
    """Return a figure before and after, in words."""
    return Change(
        figure=figure,
        label=translator.gettext(FIGURES[figure][0]),
        unit=FIGURES[figure][1],
        before=before,
        after=after,
        before_text=figure_words(figure, before, translator),
        after_text=figure_words(figure, after, translator),
    )


def _remedy(key: str, worked: Worked, translator: Translator) -> Remedy:
    return Remedy(
        key=key,
        outcome=OUTCOMES[key],
        text=say(Phrase(key, worked.figures), REMEDIES, translator),
        figures=[change(*entry, translator) for entry in worked.changes],
        price=worked.price,
    )


def cause_of(lens: OnFile, key: str, answers: Mapping[str, str]) -> Cause | None:
    """Return one cause, judged for this lens; None where it does not apply to it."""
    rule, translator = CAUSES[key], lens.translator
    rating = rule.rate(lens)
    if rating is None:
        return None
    tells = told(rule, answers)
    asked = [Phrase("told", {"question": TESTS[t], "answer": answers[t]}) for t in rule.tells if t in answers]
    remedies = [] if tells == "against" else [_worked(lens, name, work) for name, work in rule.remedies]
    return Cause(
        key=key,
        kind=rule.kind,
        text=translator.gettext(CAUSE_TEXTS[key]),
        level=rating.level,
        told=tells,
        why=[reason(phrase, WHY, translator) for phrase in (*rating.why, *asked)],
        remedies=[remedy for remedy in remedies if remedy is not None],
    )


def the_eye_itself(translator: Translator) -> Cause:
    """Return the cause that is left where a sign is there: no lens is judged for it."""
    return Cause(
        key="eye-itself",
        kind="eye",
        text=translator.gettext(CAUSE_TEXTS["eye-itself"]),
        level="not worked out",
        told=None,
        why=[],
        remedies=[_remedy("refer-eye", Worked(), translator)],
    )


def _worked(lens: OnFile, key: str, work: Work) -> Remedy | None:
    worked = work(lens)
    return None if worked is None else _remedy(key, worked, lens.translator)


def wrong_as_made(lens: OnFile, made: AsMade) -> Cause | None:
    """Return what is out of tolerance as the first cause, with the remake as ordered; None where nothing is."""
    wrong = [finding for finding in made.findings if finding.within is False]
    if not wrong:
        return None
    translator = lens.translator
    worst: dict[str, tuple[float, float]] = {}
    for finding in wrong:
        figure, pair = OFF_FIGURES[finding.figure], (abs(finding.off), finding.tolerance or 0.0)
        worst[figure] = max(worst.get(figure, pair), pair)
    changes = [change(figure, off, allowed, translator) for figure, (off, allowed) in worst.items()]
    at_most = translator.gettext(AT_MOST)
    figures = [part.model_copy(update={"after_text": at_most % {"figure": part.after_text}}) for part in changes]
    remake = _remedy("remake-as-ordered", Worked(), translator).model_copy(update={"figures": figures})
    return Cause(
        key="wrong-as-made",
        kind="made",
        text=translator.gettext(CAUSE_TEXTS["wrong-as-made"]),
        level="likely",
        told=None,
        why=[reason(_off_phrase(finding, translator), WHY, translator) for finding in wrong],
        remedies=[remake],
    )


def finding_words(finding: Finding, value: float | None, translator: Translator) -> str:
    """Return a measured, ordered or allowed figure with its unit."""
    if value is None:
        return "–"
    digits = {"D": 2, "Δ": 2, "mm": 1, "°": 0}[finding.unit]
    return _with_unit(translator.number(value, digits=digits), finding.unit)


def _off_phrase(finding: Finding, translator: Translator) -> Phrase:
    words = {
        name: finding_words(finding, getattr(finding, name), translator)
        for name in ("ordered", "measured", "tolerance")
    }
    return Phrase("off", {"figure": finding.label, "eye": EYES[finding.eye], **words})
