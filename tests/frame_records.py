"""A frame record as a tracer writes it, for several tests."""

import math


def radius_mm(turn: float) -> float:
    """The radius of an ellipse of 52 by 38 mm, by its own equation, drawn in by up to 15 % below at the nose."""
    inside = math.sin(2 * (turn - 1.5 * math.pi)) ** 2 if turn > 1.5 * math.pi else 0.0
    ellipse = 26.0 * 19.0 / math.hypot(19.0 * math.cos(turn), 26.0 * math.sin(turn))
    return ellipse * (1 - 0.15 * inside)


def trace(side: str, points: int = 72) -> str:
    """The lines of one side's trace, from 3 o'clock anticlockwise as seen from in front."""
    turns = [2 * math.pi * k / points for k in range(points)]
    seen = turns if side == "R" else [(math.pi - turn) % (2 * math.pi) for turn in turns]
    hundredths = [str(round(100 * radius_mm(turn))) for turn in seen]
    rows = [";".join(hundredths[k : k + 8]) for k in range(0, points, 8)]
    return f"TRCFMT=1;{points};E;{side};F\r\n" + "".join(f"R={row}\r\n" for row in rows)


SIZES = 'JOB=17\r\nCLIENT="Nell Ferrow"\r\nHBOX=52.00;52.00\r\nVBOX=38.00;38.00\r\nDBL=18.00\r\n'
WHOLE = SIZES + trace("R") + trace("L")
