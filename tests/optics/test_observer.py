"""What others see of the lens."""

import pytest

from advisor.optics.observer import observer_contrast


def test_a_bare_plate_before_a_face_worked_by_hand() -> None:
    # R 0.0769, T 0.9231 (4 % a face, all bounces): 0.0769 x 3000 / (0.9231^2 x 60) = 4.5123
    contrast = observer_contrast(0.0769, transmittance=0.9231, window_luminance_cd_m2=3000.0, face_luminance_cd_m2=60.0)
    assert contrast == pytest.approx(4.5123, abs=5e-4)


@pytest.mark.parametrize(
    ("field", "value"),
    [
        ("lens_reflectance", 1.1),
        ("transmittance", 0.0),
        ("window_luminance_cd_m2", -1.0),
        ("face_luminance_cd_m2", 0.0),
    ],
)
def test_values_outside_the_range_are_refused_by_name(field: str, value: float) -> None:
    values = {
        "lens_reflectance": 0.05,
        "transmittance": 0.9,
        "window_luminance_cd_m2": 100.0,
        "face_luminance_cd_m2": 50.0,
        field: value,
    }
    reflectance = values.pop("lens_reflectance")
    with pytest.raises(ValueError, match=field):
        observer_contrast(reflectance, **values)
