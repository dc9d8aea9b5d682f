"""A number is read as people type it; the cases are common practice, no source, and the browser reads the same ones."""

import json
from pathlib import Path
from typing import Any, get_args

import pytest
from hypothesis import given
from hypothesis import strategies as st

from advisor.counsel.written_power import Kind, read_written

CASES: list[dict[str, Any]] = json.loads(
    (Path(__file__).parent / "published" / "written_powers.json").read_text(encoding="utf-8")
)["cases"]


@pytest.mark.parametrize("case", CASES, ids=lambda case: f"{case['kind']} {case['typed']!r}")
def test_a_number_is_read_as_it_is_meant(case: dict[str, Any]) -> None:
    reading = read_written(case["typed"], kind=case["kind"])
    if case["value"] == "unreadable":
        assert reading is None
        return
    assert reading is not None
    assert reading.value == case["value"]
    assert reading.is_literal == (case["read_as"] == "")


def test_every_kind_of_field_has_a_case() -> None:
    assert {case["kind"] for case in CASES} == set(get_args(Kind))


@given(text=st.text(max_size=60), kind=st.sampled_from(get_args(Kind)))
def test_no_text_is_too_odd_to_be_read_or_refused(text: str, kind: Kind) -> None:
    reading = read_written(text, kind=kind)
    assert reading is None or reading.value is None or abs(reading.value) < 1e41


@given(hundredths=st.integers(100, 3000), sign=st.sampled_from(["+", "-", "\N{MINUS SIGN}"]))
def test_the_decimal_mark_may_be_left_out_of_any_power_from_one_dioptre_up(hundredths: int, sign: str) -> None:
    bare = read_written(f"{sign}{hundredths}", kind="sphere")
    pointed = read_written(f"{sign}{hundredths // 100}.{hundredths % 100:02}", kind="sphere")
    assert bare is not None
    assert pointed is not None
    assert (bare.value, bare.is_literal) == (pointed.value, False)
