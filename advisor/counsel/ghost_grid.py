"""Which mirrored images are above notice in which scene: a grid of scenes and paths, the worse eye in each cell."""

from dataclasses import dataclass

from advisor.counsel.comparison import OptionFigures
from advisor.counsel.lens_figures import Ghost, Path, Verdict
from advisor.counsel.stock_items import Scene
from advisor.optics.visibility import VERDICTS


@dataclass(frozen=True)
class Cell:
    """One image in one scene: a place in the verdicts, 0 to 4, or a contrast where the light is past their range."""

    place: int
    verdict: Verdict
    by_contrast: bool
    contrast: float
    haze: bool


@dataclass(frozen=True)
class GridRow:
    """One scene; paths that its light cannot take have no cell."""

    scene: str
    label: str
    cells: dict[Path, Cell]


PATHS: tuple[Path, ...] = ("ahead-inner", "behind-back", "behind-front", "cornea-back", "cornea-front")


def ghost_grid(option: OptionFigures, scenes: tuple[Scene, ...]) -> list[GridRow]:
    """Return the grid of one option that can be made."""
    ghosts = [ghost for eye in (option.right, option.left) if eye is not None for ghost in eye.ghosts]
    rows = []
    for scene in scenes:
        here = [ghost for ghost in ghosts if ghost.scene == scene.key]
        cells = {path: _cell([ghost for ghost in here if ghost.path == path]) for path in PATHS}
        known = {path: cell for path, cell in cells.items() if cell is not None}
        if known:
            rows.append(GridRow(scene.key, scene.label or scene.key, known))
    return rows


def _cell(ghosts: list[Ghost]) -> Cell | None:
    worst = max(ghosts, key=lambda ghost: ghost.visibility_level or 0.0, default=None)
    if worst is None or worst.verdict is None:
        return None
    return Cell(
        place=VERDICTS.index(worst.verdict),
        verdict=worst.verdict,
        by_contrast=bool(worst.past_range),
        contrast=worst.contrast or 0.0,
        haze=bool(worst.haze),
    )
