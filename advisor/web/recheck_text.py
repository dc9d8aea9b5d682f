"""A return visit as text for a terminal: signs first, then as made, causes with what would help, and what to note."""

from collections.abc import Iterable

from advisor.counsel.phrases import mark
from advisor.counsel.recheck_answer import Cause, RecheckAnswer
from advisor.counsel.recheck_shown import EYES, finding_words
from advisor.web.language import Language
from advisor.web.table import one_line

REFER = {
    "today": mark("To an eye doctor today."),
    "soon": mark("An eye examination soon, before any other lens."),
    "refer": mark("Refer for an eye examination."),
}
OFFER = {
    "nothing": mark("No lens is offered."),
    "after-asking": mark(
        "No lens is offered until every sign is answered, and for a second light or double the cover test."
    ),
    "remake-as-ordered": mark("Remake as ordered; no other lens until these are right."),
    "open": mark("A lens may be offered where a remedy below says so."),
}
FREE = mark("No other lens is called for: what helps stands below.")
LEVELS = {
    "likely": mark("likely"),
    "possible": mark("possible"),
    "unlikely": mark("unlikely"),
    "not worked out": mark("no figure tells"),
}
MEASURED = mark("measured")
TOLD = {"for": mark("the quick test says so"), "against": mark("the quick test says no")}
ANSWERS = {"yes": mark("yes"), "no": mark("no"), "heard": mark("heard in the words"), "not-asked": mark("not asked")}
OUTCOMES = {
    "adjust": mark("adjust"),
    "clean": mark("clean"),
    "remake": mark("remake"),
    "refer": mark("refer"),
    "none": mark("nothing came of it"),
}
WAYS = OUTCOMES | {"none": mark("free")}  # what a remedy takes
PAYERS = {
    "nobody": mark("nobody"),
    "shop": mark("the shop"),
    "maker": mark("the maker"),
    "wearer": mark("the wearer"),
}


def offer_words(answer: RecheckAnswer) -> str:
    """Return what heads the answer: what may be offered, or that what helps is no lens at all."""
    remedies = {remedy.outcome for cause in answer.causes for remedy in cause.remedies}
    free = answer.offer == "nothing" and answer.refer is None and bool(remedies & {"adjust", "clean", "none"})
    return FREE if free else OFFER[answer.offer]


def recheck_text(answer: RecheckAnswer, *, title: str, currency: str, language: Language) -> str:
    """Return the whole answer as text."""
    lines = [title, "=" * len(one_line(title)), answer.lens, ""]
    lines += _signs(answer, language)
    lines += _made(answer, language)
    lines += _tests(answer, language)
    for number, cause in enumerate(answer.causes, start=1):
        lines += [*_cause(cause, f"{number}. ", currency, language), ""]
    if answer.ruled_out:
        lines.append(language.gettext(mark("Ruled out")) + ":")
        for cause in answer.ruled_out:
            lines += _cause(cause, "- ", currency, language)
        lines.append("")
    lines += [note.text for note in answer.notes]
    return "\n".join(one_line(line) for line in lines).rstrip() + "\n"


def _signs(answer: RecheckAnswer, language: Language) -> Iterable[str]:
    gettext = language.gettext
    if answer.refer is not None:
        yield gettext(REFER[answer.refer])
    if answer.urgent_help:
        yield answer.urgent_help
    yield gettext(offer_words(answer))
    yield ""
    yield gettext(mark("Signs for an eye doctor, asked always")) + ":"
    for sign in answer.signs:
        when = gettext(mark("today") if sign.when == "today" else mark("soon"))
        yield f"- [{gettext(ANSWERS[sign.answer])}] {sign.text} ({when}; {sign.key})"
    yield ""


def _made(answer: RecheckAnswer, language: Language) -> Iterable[str]:
    if not answer.as_made.findings:
        return
    gettext = language.gettext
    yield gettext(mark("As made")) + ":"
    for found in answer.as_made.findings:
        allowed = finding_words(found, found.tolerance, language)
        words = {None: "", True: gettext(mark("within")), False: gettext(mark("OUT"))}[found.within]
        parts = {
            "eye": gettext(EYES[found.eye]),
            "figure": found.label,
            "ordered": finding_words(found, found.ordered, language),
            "measured": finding_words(found, found.measured, language),
            "allowed": allowed,
            "words": words,
        }
        yield "- " + gettext(MADE_LINE) % parts
    yield ""


MADE_LINE = mark("%(eye)s %(figure)s: ordered %(ordered)s, measured %(measured)s, allowed ± %(allowed)s %(words)s")


def _tests(answer: RecheckAnswer, language: Language) -> Iterable[str]:
    if not answer.tests:
        return
    yield language.gettext(mark("Quick tests")) + ":"
    for test in answer.tests:
        yield f"- [{language.gettext(ANSWERS[test.answer or 'not-asked'])}] {test.text} ({test.key})"
    yield ""


def _cause(cause: Cause, lead: str, currency: str, language: Language) -> Iterable[str]:
    room = " " * len(lead)
    words = [language.gettext(MEASURED if cause.kind == "made" else LEVELS[cause.level])]
    if cause.told:
        words.append(language.gettext(TOLD[cause.told]))
    yield f"{lead}{cause.text} ({'; '.join(words)})"
    for reason in cause.why:
        yield f"{room}{reason.text}"
    for remedy in cause.remedies:
        price = "" if remedy.price is None else f" {language.money(remedy.price, currency=currency)}"
        yield f"{room}> [{language.gettext(WAYS[remedy.outcome])}] {remedy.text}{price}"
        for part in remedy.figures:
            yield f"{room}    {part.label}: {part.before_text} \N{RIGHTWARDS ARROW} {part.after_text}"
