"""One visit made ready to compute: every figure that was given, every stated default, and which of the two it was."""

import datetime as dt
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.prescription import EYES, Eye, SphereCylinder, at_vertex
from advisor.counsel.stock import Range
from advisor.counsel.stock_items import Scene
from advisor.counsel.visit import EyeFitting, EyePrescription, Frame, Visit
from advisor.optics.fringe import CENTRE_OF_ROTATION_MM
from advisor.optics.outline import outline_box

CHILD_UNDER = 16  # restricted supply begins here in the UK; common practice elsewhere, no source
OLDER_FROM = 65  # common practice, no source
VERTEX_MATTERS_FROM_D = 5.0  # common practice, no source
DAY_PAIR = "night-driving"  # what is turned down where a dark pair is ordered for the day by one who drives at night

# Stated defaults; every one of them is common practice, no source.
DEFAULTS: dict[str, float | str] = {
    "wearer.birth_year": 45,  # an age in years
    "wearer.eye_colour": "brown",
    "fitting.pd_mm": 31.5,
    "fitting.vertex_mm": 12.0,
    "fitting.tilt_deg": 8.0,
    "fitting.wrap_deg": 5.0,
    "fitting.working_distance_cm": 40.0,
    "prescription.vertex_mm": 12.0,
    "frame.a_mm": 52.0,
    "frame.b_mm": 36.0,
    "frame.dbl_mm": 18.0,
    "frame.rim": "full",
}
# Pigmentation factor of the eye in CIE 146:2002.
PIGMENT = {"black": 0.0, "brown": 0.5, "light": 1.0, "very-light": 1.2}


@dataclass(frozen=True)
class Case:
    """A visit with its defaults filled in. Pairs run right, left; lengths in mm, angles in degrees."""

    visit: Visit
    stock: Range
    date: dt.date
    age_years: float
    youngest_age: int | None
    pigment: float
    tested_vertex_mm: float
    fitted_vertex_mm: float
    tilt_deg: float
    wrap_deg: float
    working_distance_cm: float
    pd_mm: NDArray[np.float64]
    near_pd_mm: NDArray[np.float64]
    height_mm: NDArray[np.float64]
    a_mm: float
    b_mm: float
    dbl_mm: float
    ed_mm: float | None
    rim: str
    scenes: tuple[Scene, ...]
    defaults_used: tuple[str, ...] = field(default=())

    def eye(self, eye: Eye) -> EyePrescription:
        """Return what is written for one eye."""
        return self.visit.prescription.right if eye == "right" else self.visit.prescription.left

    def is_default(self, name: str) -> bool:
        """Whether a stated default stands in for a figure that was left out."""
        return name in self.defaults_used

    def compensated(self, eye: Eye) -> SphereCylinder:
        """Return the distance power moved from the tested to the fitted vertex distance."""
        return at_vertex(self.eye(eye).power, from_mm=self.tested_vertex_mm, to_mm=self.fitted_vertex_mm)

    @property
    def strongest_d(self) -> float:
        """The greatest power along any meridian of either eye, without its sign."""
        powers = [self.eye(eye).power for eye in EYES]
        return max(max(abs(p.sphere_d), abs(p.sphere_d + p.cylinder_d)) for p in powers)

    @property
    def has_add(self) -> bool:
        """Whether either eye has an add."""
        return any((self.eye(eye).add or 0.0) > 0.0 for eye in EYES)

    @property
    def has_balance(self) -> bool:
        """Whether either lens is a balance lens, before an eye that sees little."""
        return any(self.eye(eye).balance for eye in EYES)

    @property
    def relies_on_one_eye(self) -> bool:
        """Whether there is one good eye: by the answer, else by a balance lens, which stands for one."""
        answer = self.life("one_good_eye")
        return answer == "yes" or (answer == "not-asked" and self.has_balance)

    @property
    def never_at_night(self) -> bool:
        """Whether nobody drives at night in this pair: never at all, or a pair for the day is on file."""
        kept = any(entry.key == DAY_PAIR for entry in self.visit.declined or ())
        return kept or "never" in (self.life("night_driving"), self.life("driving"))

    @property
    def is_child(self) -> bool:
        """Whether the wearer is a child, by the answer or by the youngest age that fits."""
        answered = self.life("child") == "yes"
        return answered or (self.youngest_age is not None and self.youngest_age < CHILD_UNDER)

    def life(self, question: str) -> str:
        """Return an answer about daily life, or ``not-asked``, which is never the same as ``never``."""
        life = self.visit.daily_life
        answer = None if life is None else getattr(life, question)
        return "not-asked" if answer is None else str(answer)

    def says(self, question: str) -> bool:
        """Whether the answer is yes, sometimes or often."""
        return self.life(question) in ("yes", "sometimes", "often")

    def answers(self) -> dict[str, str]:
        """Return the questions about daily life that were answered with a word, and the answers."""
        life = self.visit.daily_life
        given = {} if life is None else life.model_dump(exclude_none=True)
        return {name: answer for name, answer in given.items() if isinstance(answer, str)}


def near_pd(pd_mm: float, working_distance_cm: float, vertex_mm: float) -> float:
    """Return the monocular PD at the lens for an eye turned to a near point in the middle.

    By similar triangles from the eye's centre of rotation, 15 mm behind the cornea (common practice, no source).
    """
    work_mm = 10.0 * working_distance_cm
    return pd_mm * work_mm / (work_mm + vertex_mm + CENTRE_OF_ROTATION_MM)


def traced_box(frame: Frame | None) -> tuple[float, float] | None:
    """Return width and height of a traced outline, or None where there is none."""
    outline = frame.outline if frame else None
    if outline is None:
        return None
    width, height, _, _ = outline_box(np.array(outline.right or outline.left))
    return float(width), float(height)


class _Filled:
    """Takes given figures and remembers which defaults stood in."""

    def __init__(self) -> None:
        self.used: list[str] = []

    def number(self, given: float | None, name: str, *, default: float | None = None) -> float:
        if given is not None:
            return float(given)
        self.used.append(name)
        if default is None:
            generic = name.replace(".right.", ".").replace(".left.", ".")
            return float(DEFAULTS[generic])
        return default

    def word(self, given: str | None, name: str) -> str:
        if given is not None:
            return given
        self.used.append(name)
        return str(DEFAULTS[name])


def build_case(visit: Visit, stock: Range, *, today: dt.date) -> Case:
    """Fill in the stated defaults of a visit and remember which were used."""
    filled = _Filled()
    wearer, fitting, frame = visit.wearer, visit.fitting, visit.frame
    age = visit.age(today=today)
    traced = traced_box(frame)
    given_a, given_b = (frame.a_mm, frame.b_mm) if frame else (None, None)
    a_mm = filled.number(given_a if given_a is not None or traced is None else traced[0], "frame.a_mm")
    b_mm = filled.number(given_b if given_b is not None or traced is None else traced[1], "frame.b_mm")
    eyes: list[EyeFitting | None] = [fitting.right if fitting else None, fitting.left if fitting else None]
    working = fitting.working_distance_cm if fitting else None
    fitted = fitting.vertex_mm if fitting else None
    vertex_mm = fitted if fitted is not None else float(DEFAULTS["fitting.vertex_mm"])
    # a working distance is put to use by an add alone, so only then is its default worth a word
    work_cm = working[0] if working else None
    if work_cm is None and not any(eye.add for eye in (visit.prescription.right, visit.prescription.left)):
        work_cm = float(DEFAULTS["fitting.working_distance_cm"])
    work_cm = filled.number(work_cm, "fitting.working_distance_cm")
    pd_mm = np.array(
        [filled.number(e.pd_mm if e else None, f"fitting.{name}.pd_mm") for name, e in zip(EYES, eyes, strict=True)]
    )
    # where the tested distance is not known the power stays as written, whatever the fitted one
    tested = filled.number(visit.prescription.vertex_mm, "prescription.vertex_mm", default=fitted)
    return Case(
        visit=visit,
        stock=stock,
        date=visit.date or today,
        age_years=filled.number(age, "wearer.birth_year"),
        youngest_age=visit.youngest_age(today=today),
        pigment=PIGMENT[filled.word(wearer.eye_colour if wearer else None, "wearer.eye_colour")],
        tested_vertex_mm=tested,
        fitted_vertex_mm=filled.number(fitted, "fitting.vertex_mm", default=tested),
        tilt_deg=filled.number(fitting.tilt_deg if fitting else None, "fitting.tilt_deg"),
        wrap_deg=filled.number(fitting.wrap_deg if fitting else None, "fitting.wrap_deg"),
        working_distance_cm=work_cm,
        pd_mm=pd_mm,
        near_pd_mm=np.array(
            [
                near if (near := e.near_pd_mm if e else None) is not None else near_pd(pd, work_cm, vertex_mm)
                for e, pd in zip(eyes, pd_mm.tolist(), strict=True)
            ]
        ),
        height_mm=np.array(
            [
                filled.number(e.height_mm if e else None, f"fitting.{name}.height_mm", default=b_mm / 2)
                for name, e in zip(EYES, eyes, strict=True)
            ]
        ),
        a_mm=a_mm,
        b_mm=b_mm,
        dbl_mm=filled.number(frame.dbl_mm if frame else None, "frame.dbl_mm"),
        ed_mm=frame.ed_mm if frame else None,
        rim=filled.word(frame.rim if frame else None, "frame.rim"),
        scenes=stock.scenes_of(visit.scenes),
        defaults_used=tuple(filled.used),
    )
