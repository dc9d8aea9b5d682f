"""Remedies of form, keeping and wear, and those that look back at the worn pair or at what was ordered."""

from advisor.counsel.batch import match_share
from advisor.counsel.choices import Faces
from advisor.counsel.form import SMALLER_BY_MM
from advisor.counsel.prescription import EYES
from advisor.counsel.recheck_lens import OnFile, eyes_of, most, worst_second
from advisor.counsel.recheck_remedies import Changes, Worked, is_less, priced
from advisor.counsel.recheck_worn import size_change_percent
from advisor.counsel.stock import BARE


def keep_curve(lens: OnFile) -> Worked | None:
    """The front curve of the worn pair: the change of size with it, against now."""
    worn = lens.visit.worn_now
    if worn is None or worn.front_power_d is None:
        return None
    kept = lens.offered({"kept": lens.with_parts(front_power_d=worn.front_power_d)})
    if not kept:
        return None
    figures = kept[0][1]
    now, then = size_change_percent(lens, lens.option), size_change_percent(lens, figures)
    if now is None or then is None or then >= now:
        return None
    changes = (("magnification_change_percent", now, then),)
    return Worked({"front_power_d": most(figures, "front_power_d")}, changes, figures.price)


def near_pair(lens: OnFile) -> Worked | None:
    """A pair for near, looked through at its centres; what remains of the imbalance is not promised."""
    kind = lens.laid.design.kind
    has_add = any(lens.case.eye(eye).add for eye in EYES)
    reading = next((design.key for design in lens.stock.design if design.kind == "reading"), None)
    if kind == "reading" or not has_add or reading is None:
        return None
    sold = lens.offered({"near": lens.with_parts(design=reading)}, own_pair=True)
    return Worked(price=sold[0][1].price) if sold else None


def check_coating(lens: OnFile) -> Worked | None:
    """How plain the second image would be with one face bare, against what was ordered."""
    faces = lens.with_parts().coating
    if not isinstance(faces, Faces):
        return None
    bare = [Faces(front=BARE.key, back=faces.back), Faces(front=faces.front, back=BARE.key)]
    found = lens.laid_out([lens.with_parts(coating=pair) for pair in bare])
    levels = [
        ghost.visibility_level
        for option in found
        if (ghost := worst_second(option, lens.night_scenes())) is not None and ghost.visibility_level is not None
    ]
    now = worst_second(lens.option, lens.night_scenes())
    if not levels or now is None or now.visibility_level is None:
        return Worked()
    return Worked({}, (("visibility_level", max(levels), now.visibility_level),))


def smaller_frame(lens: OnFile) -> Worked | None:
    """The same lens in a frame 4 mm smaller."""
    pairs = []
    for eye in eyes_of(lens.option):
        small = (eye.smaller_frame or {}).get("edge_thickest_mm")
        if small is not None and eye.edge_thickest_mm is not None:
            pairs.append((eye.edge_thickest_mm, small))
    if not pairs:
        return None
    changes: Changes = (("edge_thickest_mm", *max(pairs)),)
    return Worked({"by_mm": SMALLER_BY_MM}, changes) if is_less(changes) else None


def remake_as_pair(lens: OnFile) -> Worked | None:
    """Both lenses coated in one run; the face that matches least counts."""
    faces = [face for face in (lens.laid.front_face, lens.laid.back_face) if face.coating.layers]
    apart = [match_share(face, one_run=False) for face in faces]
    together = [match_share(face, one_run=True) for face in faces]
    known, better = [x for x in apart if x is not None], [x for x in together if x is not None]
    changes: Changes = (("match_percent", 100.0 * min(known), 100.0 * min(better)),) if known and better else ()
    return priced(Worked({}, changes), lens.option)


def film_on_faces(lens: OnFile) -> Worked | None:
    """A film, where the lens has none on one of its faces."""
    return None if lens.laid.front_face.has_film and lens.laid.back_face.has_film else Worked()


def replace_same(lens: OnFile) -> Worked | None:
    """The same lens again; the coating's guarantee says who may have to pay."""
    months = [coating.warranty_months for coating in (lens.laid.front, lens.laid.back)]
    known = [month for month in months if month is not None]
    return priced(Worked({"warranty_months": max(known, default=None)}), lens.option)


def top_layer(lens: OnFile) -> Worked | None:
    """A coating with a repellent top, where this lens has none that is known."""
    if has_repellent_top(lens):
        return None
    tops = {
        film.label or film.key: lens.with_parts(coating=film.key)
        for film in lens.films()
        if film.top and film.top.water_repellent and film.top.oil_repellent
    }
    sold = lens.offered(tops)
    if not sold:
        return None
    name, figures = min(sold, key=lambda pair: (pair[1].price is None, pair[1].price or 0.0))
    return priced(Worked({"coating": name}), figures)


def has_repellent_top(lens: OnFile) -> bool:
    """Tell whether both faces are known to have a repellent top."""
    tops = [coating.top for coating in (lens.laid.front, lens.laid.back)]
    return all(top is not None and bool(top.water_repellent) and bool(top.oil_repellent) for top in tops)
