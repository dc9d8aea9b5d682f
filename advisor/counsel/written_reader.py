"""Goes through the tokens of a written prescription by a table of patterns; the rules stand in ``written_line``."""

import re
from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass, field

from advisor.counsel.prescription import EYES, Eye
from advisor.counsel.written_power import Kind, read_written
from advisor.counsel.written_tokens import Token

LARGEST = 30.0  # powers, prisms and vertex distances beyond it are not read
MOST_PRISMS = 2
EYE_PD_MM = (15.0, 38.0)
BOTH_PD_MM = (42.0, 80.0)
BOTH = "right left"

_BASE = "(?:BD|Q)"
_PATTERNS = (
    ("ETE", "both_marks"),
    ("[EO]", "eye_mark"),
    (rf"PN[PU]*(?:{_BASE}|D)|N[PU]*K?{_BASE}|NP+D", "prism"),
    ("AENT?EN", "add_by_eye"),
    (rf"ANTN(?![PUK]*{_BASE})", "add_pair"),
    ("AON|ANO", "add_of_both"),
    ("AN", "add"),
    ("R?KENU?T?ENU?", "pd_by_eye"),
    ("R?KNU?TNU?", "pd_pair"),
    ("R?KNU?(?!TN)", "pd"),
    ("VU?N", "vertex"),
    ("SN", "sphere"),
    ("CN", "cylinder"),
    ("X{1,2}N", "axis"),
    ("N(?!P*B|P+(?!N))", "number"),
    ("L", "plano"),
    ("[SCUT]", "behind"),
    ("G", "gap"),
)


@dataclass
class Reader:
    """``found`` grows by what is understood, ``read`` by the places of its tokens, ``said`` by what was decided."""

    tokens: Sequence[Token]
    found: dict[str, str] = field(default_factory=dict)
    read: set[int] = field(default_factory=set)
    said: set[str] = field(default_factory=set)
    eyes: tuple[Eye, ...] = ()
    at: int = 0
    is_chained: bool = False  # nothing unknown stands between here and the sphere

    def run(self) -> None:
        """Read everything that can be read; the first pattern that fits and is accepted counts."""
        kinds = "".join(token.kind for token in self.tokens)
        rules = [(re.compile(pattern), getattr(self, f"_{name}")) for pattern, name in _PATTERNS]
        while self.at < len(self.tokens):
            taken = self._first_accepted(kinds, rules)
            self.is_chained = self.is_chained and taken > 0
            self.read.update(range(self.at, self.at + taken))
            self.at += max(taken, 1)

    def _first_accepted(
        self, kinds: str, rules: Iterable[tuple[re.Pattern[str], Callable[[Sequence[Token]], bool]]]
    ) -> int:
        """Return how many tokens were understood here."""
        for pattern, accepts in rules:
            fitting = pattern.match(kinds, self.at)
            if fitting and accepts(self.tokens[self.at : fitting.end()]):
                return fitting.end() - self.at
        return 0

    def _has(self, name: str, eyes: Iterable[Eye]) -> bool:
        return any(f"prescription.{eye}.{name}" in self.found for eye in eyes)

    def _take(self, kind: Kind, text: str, eyes: tuple[Eye, ...]) -> bool:
        """Take a figure of a prescription for eyes that do not have it yet."""
        reading = read_written(text, kind=kind)
        value = reading.value if reading else None
        if value is None or not eyes or self._has(kind, eyes) or not self._is_possible(kind, text, value):
            return False
        if kind in ("sphere", "cylinder") and value and text[0] not in "+-":
            self.said.add("line-no-sign")
        self.found |= {f"prescription.{eye}.{kind}": text for eye in eyes}
        return True

    def _is_possible(self, kind: Kind, text: str, value: float) -> bool:
        if kind == "axis":
            return text.isdigit() and value <= 180
        return abs(value) <= LARGEST and (kind != "add" or value >= 0)

    # What each pattern takes; False leaves its tokens to the next one.

    def _both_marks(self, tokens: Sequence[Token]) -> bool:
        self.eyes, self.is_chained = EYES, False
        return tokens[0].says != tokens[2].says

    def _eye_mark(self, tokens: Sequence[Token]) -> bool:
        self.eyes, self.is_chained = tuple(eye for eye in EYES if tokens[0].says in (eye, "")), False
        return True

    def _sphere(self, tokens: Sequence[Token]) -> bool:
        self.is_chained = self._take("sphere", tokens[-1].says, self.eyes)
        return self.is_chained

    def _plano(self, tokens: Sequence[Token]) -> bool:
        return self._sphere(tokens)

    def _cylinder(self, tokens: Sequence[Token]) -> bool:
        return self._has("sphere", self.eyes) and self._take("cylinder", tokens[-1].says, self.eyes)

    def _axis(self, tokens: Sequence[Token]) -> bool:
        return self._has("cylinder", self.eyes) and self._take("axis", tokens[-1].says, self.eyes)

    def _number(self, tokens: Sequence[Token]) -> bool:
        """Take a number without a word: the sphere, then the cylinder, then a whole number as the axis."""
        is_power = not tokens[0].says.isdigit()
        if not self._has("sphere", self.eyes):
            return is_power and self._sphere(tokens)
        if not self._has("cylinder", self.eyes):
            return self.is_chained and is_power and self._cylinder(tokens)
        return self.is_chained and not is_power and self._axis(tokens)

    def _prism(self, tokens: Sequence[Token]) -> bool:
        amount = next(token.says for token in tokens if token.kind == "N")
        if len(self.eyes) != 1 or amount[0] in "+-" or _number(amount) > LARGEST:
            return False
        start = f"prescription.{self.eyes[0]}.prism"
        part = sum(f"{start}.{k}.amount" in self.found for k in range(MOST_PRISMS))
        if part < MOST_PRISMS:
            self.found |= {f"{start}.{part}.amount": amount, f"{start}.{part}.base": tokens[-1].says}
        return part < MOST_PRISMS

    def _add(self, tokens: Sequence[Token]) -> bool:
        """Take an add for its eye, or for both where it stands once behind both, after a gap."""
        is_after_gap = self.at > 0 and self.tokens[self.at - 1].kind == "G"
        have_spheres = all(self._has("sphere", (eye,)) for eye in EYES)
        if is_after_gap and have_spheres and not self._has("add", EYES) and self._add_of_both(tokens):
            self.said.add("line-add-both")
            return True
        return self._take("add", tokens[-1].says, self.eyes)

    def _add_of_both(self, tokens: Sequence[Token]) -> bool:
        return self._take("add", _numbers(tokens)[0], EYES)

    def _add_pair(self, tokens: Sequence[Token]) -> bool:
        return self._take_each("add", _numbers(tokens), EYES)

    def _add_by_eye(self, tokens: Sequence[Token]) -> bool:
        return self._take_each("add", _numbers(tokens), _marked(tokens))

    def _take_each(self, kind: Kind, texts: Sequence[str], eyes: Sequence[Eye]) -> bool:
        """Take two figures, one for each eye, or neither."""
        before = dict(self.found)
        if all(self._take(kind, text, (eye,)) for text, eye in zip(texts, eyes, strict=True)):
            return True
        self.found = before
        return False

    def _pd_by_eye(self, tokens: Sequence[Token]) -> bool:
        return self._take_pds(tokens, _marked(tokens))

    def _pd_pair(self, tokens: Sequence[Token]) -> bool:
        return self._take_pds(tokens, EYES)

    def _pd(self, tokens: Sequence[Token]) -> bool:
        """Take one PD: of both eyes together, halved, or of the eye it stands with."""
        text = _numbers(tokens)[0]
        if _is_within(text, BOTH_PD_MM):
            self.said.add("line-pd-halved")
            return self._put_pds(tokens, {eye: f"{_number(text) / 2:g}" for eye in EYES})
        return len(self.eyes) == 1 and self._take_pds(tokens, self.eyes)

    def _take_pds(self, tokens: Sequence[Token], eyes: Sequence[Eye]) -> bool:
        texts = _numbers(tokens)
        if len(set(eyes)) != len(texts) or not all(_is_within(text, EYE_PD_MM) for text in texts):
            return False
        return self._put_pds(tokens, dict(zip(eyes, texts, strict=True)))

    def _put_pds(self, tokens: Sequence[Token], by_eye: dict[Eye, str]) -> bool:
        name = "near_pd_mm" if tokens[0].kind == "R" else "pd_mm"
        named = {f"fitting.{eye}.{name}": text for eye, text in by_eye.items()}
        if named.keys() & self.found.keys():
            return False
        self.found |= named
        return True

    def _vertex(self, tokens: Sequence[Token]) -> bool:
        name, text = "prescription.vertex_mm", tokens[-1].says
        if name in self.found or not _is_within(text, (0, LARGEST)):
            return False
        self.found[name] = text
        return True

    def _behind(self, _tokens: Sequence[Token]) -> bool:
        """Pass over a unit, a tie, or "sph" behind a sphere, where what stands before it was read."""
        return self.at - 1 in self.read

    def _gap(self, _tokens: Sequence[Token]) -> bool:
        return True


def _number(text: str) -> float:
    return float(text.replace(",", "."))


def _numbers(tokens: Sequence[Token]) -> list[str]:
    return [token.says for token in tokens if token.kind == "N"]


def _marked(tokens: Sequence[Token]) -> list[Eye]:
    return [eye for token in tokens if token.kind == "E" for eye in EYES if token.says == eye]


def _is_within(text: str, limits: tuple[float, float]) -> bool:
    return text[0] not in "+-" and limits[0] <= _number(text) <= limits[1]
