"""What to ask at the counter: six questions first, in natural words, then what age, power, rim and answers open.

A question stands for fields of the visit; one whose fields all have an answer is not asked again. Left out stays "not
asked", which is never read as "never".
"""

from collections.abc import Callable
from dataclasses import dataclass

from advisor.counsel.case import OLDER_FROM, VERTEX_MATTERS_FROM_D, Case
from advisor.counsel.phrases import mark
from advisor.counsel.prescription import EYES
from advisor.counsel.visit import DailyLife

STRONG_FROM_D, STRONG_CYLINDER_D = 3.0, 2.0  # common practice, no source
CATARACT_FROM_AGE = 60


@dataclass(frozen=True)
class Question:
    """One question: its words, and the fields of the visit that its answer fills, as the visit file names them."""

    key: str
    text: str
    fields: tuple[str, ...]


def _life(*names: str) -> tuple[str, ...]:
    return tuple(f"daily_life.{name}" for name in names)


FIRST: tuple[Question, ...] = (
    Question("drive", mark("Do you drive, and at night?"), _life("driving", "night_driving")),
    Question(
        "look-at",
        mark("What do you look at most, and how far away is it?"),
        (*_life("screen_work", "face_to_face"), "fitting.working_distance_cm"),
    ),
    Question(
        "harm",
        mark("What could knock, splash, heat or dust them?"),
        _life("impact", "sprays_solvents", "water_salt_chlorine", "heat_steam", "dust"),
    ),
    Question("weaker-eye", mark("Is one of your eyes much weaker?"), _life("one_good_eye")),
    Question(
        "last-pair",
        mark("What did you like or dislike about the last pair?"),
        ("worn_now.liked", "worn_now.disliked", *_life("bothered_thickness", "bothered_weight", "bothered_smears")),
    ),
    Question("spend", mark("What would you like to spend?"), _life("price_limit")),
)


@dataclass(frozen=True)
class Opening:
    """A question that is asked only where something makes it matter."""

    question: Question
    opens: Callable[[Case], bool]


def _age_known(case: Case) -> bool:
    return case.youngest_age is not None


def _is_strong(case: Case) -> bool:
    return case.strongest_d >= STRONG_FROM_D


def _has_strong_cylinder(case: Case) -> bool:
    return any(abs(case.eye(eye).power.cylinder_d) >= STRONG_CYLINDER_D for eye in EYES)


NEXT: tuple[Opening, ...] = (
    Opening(Question("child", mark("Are they for a child?"), _life("child")), lambda case: not _age_known(case)),
    Opening(
        Question("new-glare", mark("Is the glare at night new, or worse than it was?"), _life("new_glare")),
        lambda case: case.says("night_driving"),
    ),
    Opening(
        Question("two-wheeler", mark("Do you ride a bicycle or a motorcycle?"), _life("two_wheeler")),
        lambda case: case.says("impact") or case.says("driving"),
    ),
    Opening(
        Question("lights-behind", mark("Is there a window or a lamp behind you?"), _life("lights_behind")),
        lambda case: case.says("screen_work"),
    ),
    Opening(
        Question("thickness", mark("Do thick edges bother you?"), _life("bothered_thickness")),
        lambda case: _is_strong(case) or case.rim != "full",
    ),
    Opening(Question("weight", mark("Does their weight bother you?"), _life("bothered_weight")), _is_strong),
    Opening(
        Question("first-multifocal", mark("Is it your first pair for far and near?"), _life("first_multifocal")),
        lambda case: case.has_add,
    ),
    Opening(
        Question(
            "heights",
            mark("Measure the height of each pupil in the frame."),
            tuple(f"fitting.{eye}.height_mm" for eye in EYES),
        ),
        lambda case: case.has_add,
    ),
    Opening(
        Question("falls", mark("Have you fallen, or do you feel unsteady on stairs?"), _life("falls")),
        lambda case: case.age_years >= OLDER_FROM and _age_known(case),
    ),
    Opening(
        Question("cataract", mark("Is an operation on your eyes planned?"), _life("cataract_planned")),
        lambda case: case.life("new_glare") == "yes" or (case.age_years >= CATARACT_FROM_AGE and _age_known(case)),
    ),
    Opening(
        Question(
            "sun", mark("Are you much in the sun, or does light hurt your eyes?"), _life("sun", "light_sensitive")
        ),
        lambda case: any(option.tint is not None for option in case.visit.options or ()),
    ),
    Opening(
        Question("cleaning", mark("How do you clean your glasses?"), _life("cleaning")),
        lambda case: case.says("bothered_smears") or case.says("dust"),
    ),
    Opening(
        Question(
            "tested-vertex",
            mark("Ask the prescriber: at which vertex distance was it tested?"),
            ("prescription.vertex_mm",),
        ),
        lambda case: case.strongest_d >= VERTEX_MATTERS_FROM_D,
    ),
    Opening(
        Question(
            "worn-pair",
            mark("Measure the pair worn now: power, front curve, material."),
            ("worn_now.prescription", "worn_now.front_power_d", "worn_now.material"),
        ),
        lambda case: _is_strong(case) or _has_strong_cylinder(case),
    ),
)


def is_answered(case: Case, field: str) -> bool:
    """Whether a field of the visit, by its dotted name, was filled in."""
    value: object = case.visit
    for name in field.split("."):
        value = None if value is None else getattr(value, name)
    return value is not None and value != ""


def is_open(case: Case, question: Question) -> bool:
    """Whether something a question stands for was not answered."""
    return not all(is_answered(case, field) for field in question.fields)


def next_questions(case: Case) -> list[Question]:
    """Return what is still to ask: the six first, then what age, power, rim and answers open."""
    first = [question for question in FIRST if not any(is_answered(case, field) for field in question.fields)]
    opened = [opening.question for opening in NEXT if opening.opens(case) and is_open(case, opening.question)]
    return first + opened


def asked_fields() -> frozenset[str]:
    """Return every answer about daily life that some question fills."""
    every = [*FIRST, *(opening.question for opening in NEXT)]
    names = {field.removeprefix("daily_life.") for question in every for field in question.fields}
    return frozenset(names & set(DailyLife.model_fields))
