"""Prescriptions as HL7 FHIR VisionPrescription, read and written."""

import copy
import datetime as dt
import json
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from advisor.counsel.brought_in import Brought
from advisor.counsel.brought_texts import BROUGHT_TEXTS
from advisor.counsel.faults import Faults
from advisor.counsel.fhir_reading import MOST_ENTRIES, read_prescriptions
from advisor.counsel.fhir_writing import to_fhir
from advisor.counsel.phrases import say
from advisor.counsel.recognised import recognise
from advisor.counsel.visit import EyePrescription, Visit, check_visit
from advisor.counsel.visit_checks import prescription_warnings
from advisor.web.language import language

CODES = "http://terminology.hl7.org/CodeSystem/ex-visionprescriptionproduct"
LENS = {"coding": [{"system": CODES, "code": "lens"}]}
CONTACT = {"coding": [{"system": CODES, "code": "contact"}]}
# HL7 FHIR R4 VisionPrescription example 33123, CC0: OD -2.00 SPH, 0.5 base down, add 2.00;
# OS -1.00 -0.50 x 180, 0.5 base up, add 2.00.
EXAMPLE: dict[str, Any] = {
    "resourceType": "VisionPrescription",
    "id": "33123",
    "text": {"status": "generated", "div": "<div>...</div>"},
    "status": "active",
    "created": "2014-06-15",
    "patient": {"reference": "Patient/example"},
    "dateWritten": "2014-06-15",
    "prescriber": {"reference": "Practitioner/example"},
    "lensSpecification": [
        {"product": LENS, "eye": "right", "sphere": -2.00, "prism": [{"amount": 0.5, "base": "down"}], "add": 2.00},
        {"product": LENS, "eye": "left", "sphere": -1.00, "cylinder": -0.50, "axis": 180,
         "prism": [{"amount": 0.5, "base": "up"}], "add": 2.00},
    ],
}  # fmt: skip


def example(**right: Any) -> dict[str, Any]:
    """The example with elements of its right lens changed; None takes one away."""
    changed = copy.deepcopy(EXAMPLE)
    lens = changed["lensSpecification"][0]
    lens.update(right)
    changed["lensSpecification"][0] = {name: value for name, value in lens.items() if value is not None}
    return changed


def read(data: Any) -> Brought:
    (found,) = read_prescriptions(data)
    return found


def visit_of(data: Any) -> Visit:
    visit = read(data).visit
    assert visit is not None
    return visit


def right_of(data: Any) -> EyePrescription:
    return visit_of(data).prescription.right


def codes(data: Any) -> list[str]:
    return [note.code for note in read(data).notes]


def refused(data: Any) -> list[tuple[str, str]]:
    with pytest.raises(Faults) as caught:
        read_prescriptions(data)
    return [(one.field, one.phrase.code) for one in caught.value.faults]


def test_the_published_example_is_read_as_it_is_printed() -> None:
    prescription = visit_of(EXAMPLE).prescription
    assert prescription.written == dt.date(2014, 6, 15)
    right, left = prescription.right, prescription.left
    assert (right.sphere, right.cylinder, right.axis, right.add) == (-2.0, None, None, 2.0)
    assert [(part.amount, part.base) for part in right.prism or ()] == [(0.5, "down")]
    assert (left.sphere, left.cylinder, left.axis, left.add) == (-1.0, -0.5, 180.0, 2.0)
    assert [(part.amount, part.base) for part in left.prism or ()] == [(0.5, "up")]
    assert visit_of(EXAMPLE).wearer is None  # the file refers to a person that it does not hold
    assert codes(EXAMPLE) == ["name-missing", "measure-the-rest"]


def test_the_older_form_with_a_bare_prism_is_the_same_prescription() -> None:
    older = {name: value for name, value in EXAMPLE.items() if name not in ("status", "created", "lensSpecification")}
    lenses = copy.deepcopy(EXAMPLE["lensSpecification"])
    for lens in lenses:
        (prism,) = lens.pop("prism")
        lens |= {"product": {"system": CODES, "code": "lens"}, "prism": prism["amount"], "base": prism["base"]}
    assert visit_of({**older, "dispense": lenses}) == visit_of(EXAMPLE)


def test_the_ballot_between_the_two_forms_is_read_too() -> None:
    between = {name: value for name, value in EXAMPLE.items() if name != "lensSpecification"}
    assert visit_of({**between, "dispense": EXAMPLE["lensSpecification"]}) == visit_of(EXAMPLE)


@pytest.mark.parametrize(
    ("written", "read_as", "told"),
    [(0, 180, False), (180, 180, False), (1, 1, False), (190, 10, True), (-10, 170, True), (360, 180, True),
     (180.0, 180, False)],
)  # fmt: skip
def test_an_axis_is_brought_into_1_to_180(written: float, read_as: int, told: bool) -> None:
    data = example(cylinder=-1.0, axis=written)
    assert right_of(data).axis == read_as
    assert ("axis-turned-right" in codes(data)) is told


def test_a_plus_cylinder_keeps_its_sign() -> None:
    eye = right_of(example(sphere=-3.0, cylinder=1.0, axis=90))
    assert (eye.sphere, eye.cylinder, eye.axis) == (-3.0, 1.0, 90.0)


def test_an_oblique_prism_is_two_entries() -> None:
    both = [{"amount": 1.0, "base": "in"}, {"amount": 0.5, "base": "up", "id": "p2", "extension": []}]
    vector = right_of(example(prism=both)).prism_vector
    assert (vector.inward_prism_d, vector.upward_prism_d) == (1.0, 0.5)


def test_unknown_elements_are_passed_over_and_those_left_out_of_a_visit_are_named() -> None:
    data = example(backCurve=8.7, note=[{"text": "x"}], balance=True, pd=31)
    assert right_of(data) == right_of(EXAMPLE)
    (note,) = [one for one in read(data).notes if one.code == "elements-not-read"]
    assert note.figures == {"element_names": "backCurve, note"}
    told = say(note, BROUGHT_TEXTS, language("en"))
    assert told == "Not read, because a spectacle visit does not hold it: back curve, the prescriber's note."


def test_a_sphere_that_is_no_quarter_is_taken_and_left_to_the_visit_s_own_warning() -> None:
    visit = visit_of(example(sphere=-4.2))
    assert [note.code for note in prescription_warnings(visit)] == ["quarter-steps"]


def test_powers_in_hundredths_are_refused() -> None:
    assert refused(example(sphere=-425)) == [("lensSpecification[0].sphere", "at-least")]


@pytest.mark.parametrize(
    ("right", "field", "code"),
    [
        ({"sphere": None}, "sphere", "missing"),
        ({"sphere": "-2.00"}, "sphere", "number-as-text"),
        ({"sphere": True}, "sphere", "not-a-number"),
        ({"cylinder": -1.0}, "axis", "cylinder-without-axis"),
        ({"cylinder": -1.0, "axis": 90.5}, "axis", "not-whole"),
        ({"cylinder": -1.0, "axis": 10**30}, "axis", "at-most"),
        ({"cylinder": -1.0, "axis": "90"}, "axis", "number-as-text"),
        ({"sphere": -20, "cylinder": -15, "axis": 90}, "cylinder", "power-beyond"),
        ({"add": -1}, "add", "at-least"),
        ({"prism": [{"amount": 1}]}, "prism[0].base", "missing"),
        ({"prism": [{"amount": -1, "base": "in"}]}, "prism[0].amount", "at-least"),
        ({"prism": [{"amount": 1, "base": "nasal"}]}, "prism[0].base", "not-one-of"),
        ({"prism": [4]}, "prism[0]", "not-an-object"),
        ({"prism": 1.5}, "prism[0].base", "missing"),
        ({"eye": None}, "eye", "missing"),
        ({"eye": "both"}, "eye", "not-one-of"),
        ({"eye": "left"}, "eye", None),
    ],
)
def test_what_is_wrong_is_told_at_its_place(right: dict[str, Any], field: str, code: str | None) -> None:
    found = refused(example(**right))
    if code is None:  # the second lens of the left eye
        assert found == [("lensSpecification[1].eye", "eye-twice")]
    else:
        assert found == [(f"lensSpecification[0].{field}", code)]


def test_one_eye_alone_is_not_filled_up() -> None:
    data = copy.deepcopy(EXAMPLE)
    del data["lensSpecification"][1]
    assert refused(data) == [("lensSpecification", "left-eye-missing")]


@pytest.mark.parametrize("status", ["cancelled", "entered-in-error"])
def test_a_withdrawn_prescription_is_refused(status: str) -> None:
    assert refused({**EXAMPLE, "status": status}) == [("status", "withdrawn")]


def test_a_draft_is_read_with_a_note_and_an_unknown_status_is_not() -> None:
    assert codes({**EXAMPLE, "status": "draft"})[0] == "draft-status"
    assert refused({**EXAMPLE, "status": "finished"}) == [("status", "not-one-of")]


def test_contact_lenses_are_refused_by_code_and_by_name() -> None:
    for product in (CONTACT, {"code": "contact"}, {"text": "Contact lens"}):
        data = copy.deepcopy(EXAMPLE)
        for lens in data["lensSpecification"]:
            lens["product"] = product
        assert refused(data) == [("lensSpecification", "contact-lenses")]


def test_contact_lenses_beside_spectacles_are_left_out_with_a_note() -> None:
    data = copy.deepcopy(EXAMPLE)
    data["lensSpecification"] += [{"product": CONTACT, "eye": eye, "power": -2.75} for eye in ("right", "left")]
    assert visit_of(data) == visit_of(EXAMPLE)
    assert "contact-left-out" in codes(data)


@pytest.mark.parametrize(
    ("written", "day"),
    [("2024-02-29", dt.date(2024, 2, 29)), ("2015-02-07T13:28:17-05:00", dt.date(2015, 2, 7)), ("2015-02", None),
     ("2015-02-30", None), ("2015-02-07x", None), (20150207, None), (None, None)],
)  # fmt: skip
def test_the_day_it_was_written_is_taken_where_there_is_one(written: Any, day: dt.date | None) -> None:
    data = {**EXAMPLE, "dateWritten": written}
    assert visit_of(data).prescription.written == day
    assert ("written-not-read" in codes(data)) is (day is None)


# --- bundles and people ----------------------------------------------------------------------------------------------

PERSON = {
    "resourceType": "Patient", "id": "example", "birthDate": "1974-12-25",
    "name": [{"use": "maiden", "family": "Ashdown"}, {"use": "official", "family": "Ferrow", "given": ["Nell", "Ida"]}],
}  # fmt: skip


def bundle(*resources: Any) -> dict[str, Any]:
    return {"resourceType": "Bundle", "type": "collection", "entry": [{"resource": one} for one in resources]}


def test_a_bundle_names_the_person_a_prescription_refers_to() -> None:
    (found,) = read_prescriptions(bundle(PERSON, EXAMPLE))
    assert found.visit is not None
    assert found.visit.wearer is not None
    assert (found.visit.wearer.name, found.visit.wearer.birth_date) == ("Nell Ida Ferrow", dt.date(1974, 12, 25))
    assert [note.code for note in found.notes] == ["measure-the-rest"]


def test_a_person_is_found_by_the_full_address_and_inside_the_prescription() -> None:
    urn = "urn:uuid:04121321-4af5-424c-a0e1-ed3aab1c349d"
    referring = {**EXAMPLE, "patient": {"reference": urn}}
    data = {"resourceType": "Bundle", "entry": [{"fullUrl": urn, "resource": PERSON}, {"resource": referring}]}
    inside = {**EXAMPLE, "patient": {"reference": "#p"}, "contained": [{**PERSON, "id": "p"}]}
    for one in (data, inside):
        wearer = visit_of(one).wearer
        assert wearer is not None
        assert wearer.name == "Nell Ida Ferrow"


def test_two_persons_under_one_reference_are_neither() -> None:
    (found,) = read_prescriptions(bundle(PERSON, {**PERSON, "name": [{"text": "Somebody Else"}]}, EXAMPLE))
    assert found.visit is not None
    assert found.visit.wearer is None


@pytest.mark.parametrize(
    ("born", "fields"),
    [("1974", {"birth_year": 1974}), ("1974-12", {"birth_year": 1974}), ("1974-13-01", {}), ("1374", {}), (7, {})],
)
def test_a_birth_date_is_as_exact_as_it_is_given(born: Any, fields: dict[str, Any]) -> None:
    (found,) = read_prescriptions(bundle({**PERSON, "birthDate": born}, EXAMPLE))
    assert found.visit is not None
    assert found.visit.wearer is not None
    assert found.visit.wearer.model_dump(exclude_none=True) == {"name": "Nell Ida Ferrow", **fields}
    assert ("birth-date-not-read" in [note.code for note in found.notes]) is (not fields)


def test_a_name_shown_beside_the_reference_is_taken_with_a_note() -> None:
    data = {**EXAMPLE, "patient": {"display": "Nell Ferrow"}}
    wearer = visit_of(data).wearer
    assert wearer is not None
    assert wearer.name == "Nell Ferrow"
    assert "name-as-shown" in codes(data)


def test_a_bad_entry_stands_beside_the_good_ones() -> None:
    found = read_prescriptions(bundle(EXAMPLE, example(sphere="x"), PERSON, {"resourceType": "Encounter"}))
    assert [one.visit is not None for one in found] == [True, False]
    assert [(one.field, one.phrase.code) for one in found[1].faults] == [
        ("entry[1].resource.lensSpecification[0].sphere", "number-as-text")
    ]


def test_a_bundle_has_a_limit() -> None:
    assert len(read_prescriptions(bundle(*[EXAMPLE] * MOST_ENTRIES))) == MOST_ENTRIES
    assert refused(bundle(*[EXAMPLE] * (MOST_ENTRIES + 1))) == [("entry", "too-long")]


@pytest.mark.parametrize("data", [None, [], "x", {}, {"resourceType": "Patient"}, bundle(), bundle(PERSON)])
def test_what_holds_no_prescription_is_refused(data: Any) -> None:
    assert refused(data) == [("", "not-a-prescription")]


@pytest.mark.parametrize(
    "text", ["{" * 50_000, '{"a":' * 50_000, '{"resourceType": "Bundle", "resourceType": "Bundle"}', '{"a": NaN}']
)
def test_a_file_that_is_no_sound_json_is_refused_with_a_sentence(text: str) -> None:
    with pytest.raises(Faults):
        recognise(text.encode())


def test_a_deep_element_that_is_not_read_does_no_harm() -> None:
    deep: Any = {}
    for _ in range(300):
        deep = {"extension": [deep]}
    assert visit_of({**EXAMPLE, "extension": [deep]}) == visit_of(EXAMPLE)


ANYTHING = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats() | st.text(max_size=8),
    lambda inner: st.lists(inner, max_size=3)
    | st.dictionaries(
        st.sampled_from(["amount", "base", "code", "coding", "reference", "display", "id", "name", "given", "text"]),
        inner, max_size=3,
    ),
    max_leaves=8,
)  # fmt: skip
ROOT = ("status", "patient", "dateWritten", "lensSpecification", "dispense", "contained", "resourceType")
PART = ("product", "eye", "sphere", "cylinder", "axis", "prism", "base", "add", "note", "power")


@given(root=st.dictionaries(st.sampled_from(ROOT), ANYTHING), lens=st.dictionaries(st.sampled_from(PART), ANYTHING))
def test_whatever_stands_in_an_element_is_read_or_told(root: dict[str, Any], lens: dict[str, Any]) -> None:
    data = {**example(**lens), **root}
    for content in (data, bundle(data), bundle({**PERSON, **root}, EXAMPLE)):
        assert what_is_said(content)


def what_is_said(content: Any) -> list[str]:
    """Read a file's content and return the sentences about it, one for each prescription at least."""
    try:
        found = read_prescriptions(content)
    except Faults as error:
        return error.lines()
    notes = [say(note, BROUGHT_TEXTS, language("en")) for one in found for note in one.notes]
    return notes + [line for one in found for line in Faults(one.faults).lines()]


# --- written ---------------------------------------------------------------------------------------------------------

DAY = dt.date(2026, 12, 1)
_QUARTERS = st.integers(-40, 40).map(lambda quarters: quarters / 4)
_PRISMS = st.lists(
    st.fixed_dictionaries(
        {"amount": st.floats(0, 30, allow_subnormal=False), "base": st.sampled_from(["in", "out", "up", "down"])}
    ),
    max_size=3,
)
_EYE = st.fixed_dictionaries(
    {"sphere": _QUARTERS | st.floats(-15, 15), "cylinder": _QUARTERS, "axis": st.integers(1, 180)},
    optional={"add": st.integers(0, 16).map(lambda quarters: quarters / 4), "prism": _PRISMS},
)


@given(right=_EYE, left=_EYE, written=st.none() | st.dates(dt.date(1990, 1, 1), dt.date(2100, 1, 1)))
def test_powers_that_are_written_and_read_are_the_same(right: Any, left: Any, written: dt.date | None) -> None:
    given_day = {} if written is None else {"written": written.isoformat()}
    visit = check_visit({"prescription": {"right": right, "left": left, **given_day}})
    again = recognise(to_fhir(visit, created=DAY).text().encode())
    assert isinstance(again, list)
    back = again[0].visit
    assert back is not None
    assert back.prescription.written == written
    for one, other in ((visit.prescription.right, back.prescription.right),
                       (visit.prescription.left, back.prescription.left)):  # fmt: skip
        assert other.model_copy(update={"prism": None}) == one.model_copy(update={"prism": None})
        assert (other.prism or ()) == (one.prism or ())


WHOLE = check_visit(
    {
        "wearer": {"name": "Nell Ferrow", "birth_year": 1974},
        "prescription": {
            "for": "near", "vertex_mm": 12, "intermediate_add": 1.0,
            "right": {"sphere": -2.0, "cylinder": -0.5, "axis": 92.5},
            "left": {"sphere": -2.0, "balance": True},
        },
        "fitting": {"right": {"pd_mm": 31, "height_mm": 20}, "tilt_deg": 8},
        "frame": {"a_mm": 50},
        "daily_life": {"sun": "often"},
        "worn_now": {"liked": "light"},
        "options": [{}],
    }
)  # fmt: skip


def test_what_the_format_cannot_carry_is_told() -> None:
    written = to_fhir(WHOLE, created=DAY)
    assert [note.code for note in written.notes] == [
        "use-not-written", "add-in-between-not-written", "balance-not-written", "axis-rounded", "written-unknown",
        "parts-not-written",
    ]  # fmt: skip
    assert written.notes[-1].figures["element_names"] == ("pd, height, vertex, position, frame, life, worn, options")
    assert all(say(note, BROUGHT_TEXTS, language("en")) for note in written.notes)


def test_a_plain_prescription_is_carried_whole() -> None:
    assert to_fhir(visit_of(EXAMPLE), created=DAY).notes == ()


def test_the_name_goes_in_only_where_it_is_asked_for() -> None:
    assert "Ferrow" not in to_fhir(WHOLE, created=DAY).text()
    assert to_fhir(WHOLE, created=DAY, with_name=True).resource["patient"] == {"display": "Nell Ferrow"}


def test_every_element_that_the_standard_asks_for_is_there() -> None:
    """HL7 FHIR R4 and R5: status, created, patient, dateWritten, prescriber, and product and eye of every lens."""
    resource = json.loads(to_fhir(WHOLE, created=DAY).text())
    assert resource["resourceType"] == "VisionPrescription"
    assert (resource["status"], resource["created"]) == ("active", "2026-12-01")
    absent = "http://hl7.org/fhir/StructureDefinition/data-absent-reason"
    for name, reason in (("patient", "masked"), ("prescriber", "unknown"), ("_dateWritten", "unknown")):
        assert resource[name] == {"extension": [{"url": absent, "valueCode": reason}]}
    for lens in resource["lensSpecification"]:
        assert lens["product"]["coding"][0]["code"] == lens["product"]["text"] == "lens"
        assert isinstance(lens.get("axis", 180), int)
    assert [lens["eye"] for lens in resource["lensSpecification"]] == ["right", "left"]
