"""The slip for the maker: what was ordered, what was measured, what is asked for. Nothing of the wearer's health."""

from advisor.counsel.order import EYE_WORDS
from advisor.counsel.prescription import EYES
from advisor.counsel.recheck import recheck
from advisor.counsel.recheck_answer import Cause, RecheckAnswer, RecheckRecord, Remedy
from advisor.counsel.recheck_lens import on_file
from advisor.counsel.recheck_shown import EYES as BOTH_EYES
from advisor.counsel.recheck_shown import finding_words
from advisor.counsel.stock import Range
from advisor.counsel.visit import Visit
from advisor.web.paper import page
from advisor.web.recheck_text import OUTCOMES, PAYERS
from advisor.web.screen import screen


def maker_slip(visit: Visit, stock: Range, record: RecheckRecord, *, fonts: str = "print-fonts") -> str:
    """Return the slip of a recorded outcome as HTML, worked out again from what is kept."""
    speaker = screen()
    number = None if record.option is None else record.option + 1
    answer = recheck(
        visit,
        stock,
        says=record.says,
        tests=record.answers,
        measured=record.measured,
        number=number,
        translator=speaker,
    )
    lens = on_file(visit, stock, number=number, translator=speaker)
    cause = _cause(answer, record)
    return page(
        "paper/recheck.html",
        {
            "shop": stock.shop,
            "date": record.date,
            "reference": visit.reference,
            "record": record,
            "answer": answer,
            "cause": cause,
            "remedy": _remedy(cause, record),
            "outcome": OUTCOMES[record.outcome],
            "payer": PAYERS[record.who_pays],
            "words": answer.complaints if answer.refer is None else [],
            "made": [(EYE_WORDS[eye], lens.laid.powers[k]) for k, eye in enumerate(EYES)],
            "eye_words": BOTH_EYES,
            "finding_words": lambda finding, value: finding_words(finding, value, speaker),
            "fonts": fonts,
        },
        code=speaker.language,
    )


def _cause(answer: RecheckAnswer, record: RecheckRecord) -> Cause | None:
    """Return the recorded cause, where it is one of the glasses and not of the wearer."""
    found = (cause for cause in answer.causes if cause.key == record.cause and cause.kind in ("lens", "made", "fit"))
    return next(found, None)


def _remedy(cause: Cause | None, record: RecheckRecord) -> Remedy | None:
    if cause is None:
        return None
    return next((remedy for remedy in cause.remedies if remedy.key == record.remedy), None)
