"""Texts of what is said about a file from elsewhere: what was not read, what to look at again, what cannot be written."""

from advisor.counsel.phrases import WORD, mark

BROUGHT_TEXTS: dict[str, str] = {
    # prescriptions
    "draft-status": mark("This prescription is marked as a draft. Ask the prescriber whether it is final."),
    "axis-turned-right": mark("The right axis is written as %(written)s and is read as %(read)s. Check it."),
    "axis-turned-left": mark("The left axis is written as %(written)s and is read as %(read)s. Check it."),
    "elements-not-read": mark("Not read, because a spectacle visit does not hold it: %(element_names)s."),
    "contact-left-out": mark(
        "The file also holds contact lenses. They are left out: they need a fitting of their own."
    ),
    "name-as-shown": mark("The name is the one that the file shows beside the prescription. Ask whether it is right."),
    "name-missing": mark("The file does not say by name whose prescription this is. Ask, then write the name."),
    "birth-date-not-read": mark("The birth date in the file cannot be read. Ask for it."),
    "written-not-read": mark("The file gives no full date on which the prescription was written. Ask for it."),
    "measure-the-rest": mark(
        "Such a file holds powers, prism and add only. Measure PD, heights, vertex distance, tilt and the frame."
    ),
    # frame records
    "box-near": mark(
        "The record says %(box)s is %(given_mm)s mm, the trace measures %(traced_mm)s mm. Check it with a ruler."
    ),
    "box-from-trace": mark("The record gives no box. It is measured from the trace."),
    "box-sides-differ": mark("The boxes of the two sides differ by %(difference_mm)s mm. Check the frame for a bend."),
    "trace-shifted": mark("The trace lay %(distance_mm)s mm off the centre of its box and was moved there."),
    "one-side": mark("Only one side is traced. The other is taken as its mirror image."),
    "sides-unlike": mark(
        "The two traces are not mirror images of each other: up to %(difference_mm)s mm lie between them. "
        "Look at both sides of the drawing."
    ),
    "no-trace": mark("The record holds no trace. Only the sizes are read."),
    "longest-left-out": mark("The longest diameter in the record, %(ed_mm)s mm, does not fit its box and is left out."),
    # writing a prescription
    "parts-not-written": mark("This format has no place for: %(element_names)s."),
    "add-in-between-not-written": mark(
        "This format has no place for the intermediate add. Tell whoever reads it some other way."
    ),
    "use-not-written": mark(
        "This format cannot say that the powers are for one distance only. Tell whoever reads it some other way."
    ),
    "balance-not-written": mark("This format cannot say that a lens is a balance lens. Tell whoever reads it."),
    "axis-rounded": mark("This format holds whole degrees only: the axis %(axis_deg)s is written as %(read)s."),
    "written-unknown": mark("The date of the prescription is not known. The file says so."),
    # words for parts of a file
    WORD + "power": mark("power of a contact lens"),
    WORD + "backCurve": mark("back curve"),
    WORD + "diameter": mark("diameter"),
    WORD + "duration": mark("how long it may be worn"),
    WORD + "color": mark("colour"),
    WORD + "brand": mark("brand"),
    WORD + "note": mark("the prescriber's note"),
    WORD + "pd": mark("PD"),
    WORD + "height": mark("fitting height"),
    WORD + "vertex": mark("vertex distance"),
    WORD + "position": mark("tilt and wrap"),
    WORD + "frame": mark("the frame"),
    WORD + "life": mark("daily life"),
    WORD + "worn": mark("the pair worn now"),
    WORD + "options": mark("the options"),
}
