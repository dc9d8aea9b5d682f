from pathlib import Path
from typing import Any

import pytest

from advisor.counsel.faults import Faults
from advisor.counsel.stock import (
    Range,
    UnknownStock,
    builtin_range,
    check_range,
    keys_of,
    parse_range,
    range_to_toml,
    read_range,
)
from advisor.counsel.stock_items import Material

MATERIAL = {"key": "m", "n_d": 1.5, "abbe": 58, "density_g_cm3": 1.3}
SPECTRUM = "# measured\nnm;fraction\n" + "".join(f"{nm};0,005\n" for nm in range(380, 781, 5))


def lines(data: dict[str, Any], folder: Path | None = None) -> list[str]:
    with pytest.raises(Faults) as error:
        check_range(data, folder=folder)
    return error.value.lines()


# Index, Abbe number, density and UV cut as trade tables print them (they differ by 0.01, 2 and 0.05; no single source).
@pytest.mark.parametrize(
    ("key", "n_d", "abbe", "density_g_cm3", "uv_cut_nm", "tough"),
    [
        ("crown-glass-152", 1.523, 58.5, 2.54, 320, False),
        ("hard-resin-150", 1.498, 58, 1.32, 355, False),
        ("polyurethane-urea-153", 1.530, 44, 1.11, 395, True),
        ("mid-index-156", 1.556, 37, 1.23, 390, False),
        ("polycarbonate-159", 1.586, 30, 1.20, 385, True),
        ("thiourethane-160", 1.598, 41, 1.30, 395, False),
        ("thiourethane-167", 1.665, 32, 1.36, 395, False),
        ("episulfide-174", 1.735, 33, 1.47, 400, False),
        ("titanium-glass-180", 1.802, 35, 3.65, 335, False),
    ],
)
def test_the_built_in_materials_carry_the_trade_figures(
    key: str, n_d: float, abbe: float, density_g_cm3: float, uv_cut_nm: float, tough: bool
) -> None:
    material = builtin_range().material_of(key)
    assert (material.n_d, material.abbe, material.density_g_cm3) == (n_d, abbe, density_g_cm3)
    assert (material.uv_cut_nm, material.tough) == (uv_cut_nm, tough)


def test_every_figure_of_a_built_in_material_names_its_source() -> None:
    for material in builtin_range().material:
        told = {name for name, value in material if value is not None} - {"key", "label", "source"}
        assert isinstance(material.source, dict)
        assert set(material.source) == told, material.key


def test_high_index_and_polycarbonate_are_never_sold_without_a_hard_coat() -> None:
    always = {m.key for m in builtin_range().material if m.hard_coat == "always"}
    assert always == {"polycarbonate-159", "thiourethane-160", "thiourethane-167", "episulfide-174"}


def test_the_built_in_range_holds_the_films_scenes_and_kinds_it_promises() -> None:
    stock = builtin_range()
    assert {"bare", "hard-coat-only", "magnesium-fluoride", "blue-reflecting"} <= set(keys_of(stock.coating))
    assert sum(key.startswith("broadband") for key in keys_of(stock.coating)) >= 3
    assert {d.kind for d in stock.design} == {"single-vision", "reading", "occupational", "bifocal", "progressive"}
    assert {d.form for d in stock.design} == {"spherical", "aspheric"}
    assert {t.kind for t in stock.tint} == {"fixed", "photochromic", "polarising"}
    assert stock.offer == ()
    assert len(stock.shop.default_options or ()) == 3


def test_the_oncoming_lamps_are_those_of_the_stated_scene() -> None:
    near, aside, lit = builtin_range().scenes_of(
        [
            "oncoming-headlamps-dark-road",
            "oncoming-headlamps-dark-road-10deg",
            "oncoming-headlamps-lit-road",
        ]
    )
    for scene in (near, aside, lit):
        assert (scene.intensity_cd, scene.lamps, scene.spacing_m, scene.distance_m) == (350, 2, 1.3, 50)
    assert (near.direction_deg, aside.direction_deg, lit.direction_deg) == (4, 10, 4)
    assert (near.background_cd_m2, aside.background_cd_m2, lit.background_cd_m2) == (0.1, 0.1, 1.0)


def test_an_exported_range_reads_back_equal(tmp_path: Path) -> None:
    path = tmp_path / "range.toml"
    path.write_text(range_to_toml(builtin_range()), encoding="utf-8")
    assert read_range(path) == builtin_range()


def test_a_range_with_everything_in_it_reads_back_equal(tmp_path: Path) -> None:
    (tmp_path / "film.csv").write_text(SPECTRUM, encoding="utf-8")
    data = {
        "material": [{**MATERIAL, "source": "supplier", "sphere_range_d": [-8, 6], "blank_diameters_mm": [65, 70]}],
        "coating": [
            {"key": "measured", "spectrum": "film.csv", "care": 'two\nlines "quoted" \\'},
            {"key": "rows", "spectrum": [[380, 0.004], *([nm, 0.003] for nm in range(390, 790, 10))]},
            {"key": "declared", "declared": {"luminous_reflectance": 0.007, "hue": "green"}},
            {"key": "drawn", "layers": [["SiO2", 90.7], [1.46, 20]], "hard_coat": {"index": 1.6, "thickness_um": 3}},
        ],
        "tint": [],
        "design": [{"key": "d", "kind": "occupational", "near_share": 0.5}],
        "offer": [
            {
                "design": "d",
                "material": "m",
                "coating": "drawn",
                "faces": "back",
                "made": "stock",
                "days": 3,
                "price": 99,
            }
        ],
        "shop": {"name": "Ω & “söns”", "default_options": [{"coating": {"front": "bare", "back": "drawn"}}]},
    }
    stock = check_range(data, folder=tmp_path)
    assert parse_range(range_to_toml(stock)) == stock
    spectrum = stock.coating_of("measured").spectrum
    assert spectrum is not None
    assert (spectrum[0], len(spectrum)) == ((380, 0.005), 81)
    assert stock.tint == ()


def test_a_section_left_out_is_the_built_in_one() -> None:
    stock = check_range({"material": [MATERIAL]})
    assert keys_of(stock.material) == ["m"]
    assert stock.coating == builtin_range().coating
    assert stock.scene == builtin_range().scene
    assert stock.shop.currency == builtin_range().shop.currency


def test_default_options_never_name_what_the_shop_does_not_sell() -> None:
    stock = check_range({"material": [MATERIAL]})
    assert {option.material for option in stock.shop.default_options or ()} == {"m"}
    offer = {"design": "reading", "material": "m", "coating": "broadband", "faces": "back"}
    (option,) = check_range({"material": [MATERIAL], "offer": [offer]}).shop.default_options or ()
    assert option.design == "reading"
    assert stock.faces_of(option.coating or "")[0].key == "bare"


def test_bare_always_exists_and_stays_bare() -> None:
    stock = check_range({"coating": [{"key": "c", "layers": [["SiO2", 90]]}]})
    assert stock.coating_of("bare").layers == ()
    assert lines({"coating": [{"key": "bare", "layers": [["SiO2", 90]]}]})[0].startswith(
        "coating[0]: the coating “bare”"
    )


@pytest.mark.parametrize(
    ("data", "line"),
    [
        ({"materials": []}, "materials: this name is not known here; did you mean “material”?"),
        ({"material": [{**MATERIAL, "n_e": 1.5}]}, "material[0].n_e: give exactly one of n_d and n_e."),
        ({"material": [{"key": "m", "abbe": 58, "density_g_cm3": 1}]}, "material[0].n_e: give exactly one of n_d"),
        ({"material": [{**MATERIAL, "abbe": float("nan")}]}, "material[0].abbe: write a finite number"),
        ({"material": [{**MATERIAL, "abbe": "58"}]}, "material[0].abbe: write the number without quotation marks."),
        ({"material": [{**MATERIAL, "densty_g_cm3": 1}]}, "material[0].densty_g_cm3: this name is not known here; did"),
        ({"material": [{**MATERIAL, "tough": 1}]}, "material[0].tough: write true or false here."),
        ({"material": [{**MATERIAL, "sphere_range_d": [6, -8]}]}, "material[0].sphere_range_d: put the lower number"),
        ({"material": [{**MATERIAL, "key": "a b"}]}, "material[0].key: a key is made of letters"),
        ({"material": [{k: v for k, v in MATERIAL.items() if k != "key"}]}, "material[0].key: this is missing"),
        ({"material": [MATERIAL, MATERIAL]}, "material[1].key: the key “m” stands twice"),
        ({"coating": [{"key": "c"}]}, "coating[0]: give exactly one of layers, declared and spectrum."),
        (
            {"coating": [{"key": "c", "layers": [], "declared": {"luminous_reflectance": 0.01}}]},
            "coating[0]: give exac",
        ),
        (
            {"coating": [{"key": "c", "layers": [["SiO3", 9]]}]},
            "coating[0].layers[0][0]: “SiO3” is no film we know; did",
        ),
        ({"coating": [{"key": "c", "layers": [["SiO2", -9]]}]}, "coating[0].layers[0][1]: give 0 or more."),
        ({"coating": [{"key": "c", "layers": [["SiO2"]]}]}, "coating[0].layers[0][1]: this is missing"),
        (
            {"coating": [{"key": "c", "declared": {"luminous_reflectance": 0.7, "hue": "mauve"}}]},
            "coating[0].declared.h",
        ),
        ({"design": [{"key": "d", "kind": "occupational"}]}, "design[0].near_share: this is missing; give a value."),
        ({"tint": [{"key": "t", "luminous_transmittance": 85}]}, "tint[0].luminous_transmittance: give 1 or less."),
        (
            {
                "scene": [
                    {"key": "s", "kind": "extended", "where": "behind", "background_cd_m2": 1, "adapting_cd_m2": 1}
                ]
            },
            "scene[0]: an extended source needs luminance_cd_m2 and size_deg.",
        ),
        ({"shop": {"currency": "euro"}}, "shop.currency: "),
        (
            {"shop": {"default_options": [{"coating": "brodband"}]}},
            "shop.default_options[0].coating: “brodband” is not",
        ),
        (
            {"offer": [{"design": "reading", "material": "x", "coating": "bare"}]},
            "offer[0].material: “x” is not in the",
        ),
        ({"shop": []}, "shop: put named fields between braces here."),
        ({"material": {}}, "material: put a list between square brackets here."),
    ],
)
def test_a_bad_range_is_refused_in_our_words(data: dict[str, Any], line: str) -> None:
    assert lines(data)[0].startswith(line)


@pytest.mark.parametrize("name", ["../film.csv", "/etc/passwd", "sub/film.csv", "..", "", "a\\b.csv"])
def test_a_spectrum_file_lies_beside_the_range(tmp_path: Path, name: str) -> None:
    (tmp_path / "film.csv").write_text(SPECTRUM, encoding="utf-8")
    (tmp_path / "shop").mkdir()
    (found,) = lines({"coating": [{"key": "c", "spectrum": name}]}, folder=tmp_path / "shop")
    assert found.startswith("coating[0].spectrum: name a file that lies beside this one")


def test_a_link_out_of_the_folder_is_refused(tmp_path: Path) -> None:
    (tmp_path / "film.csv").write_text(SPECTRUM, encoding="utf-8")
    folder = tmp_path / "shop"
    folder.mkdir()
    (folder / "link.csv").symlink_to(tmp_path / "film.csv")
    (found,) = lines({"coating": [{"key": "c", "spectrum": "link.csv"}]}, folder=folder)
    assert "beside this one" in found


@pytest.mark.parametrize(
    ("content", "sentence"),
    [
        (None, "there is no such file."),
        ("380;0.1\n390;abc\n", "row 2 of the spectrum file is not a wavelength and a fraction."),
        ("380\n390\n", "row 2 of the spectrum file"),
        ("x" * 1_100_000, "the file is larger than 1 MB"),
        ("".join(f"{nm};0.5\n" for nm in range(380, 700, 10)), "the spectrum is refused: "),
        ("".join(f"{nm};0.5\n" for nm in range(380, 800, 20)), "the spectrum is refused: "),
        ("".join(f"{nm};2.5\n" for nm in range(380, 800, 10)), "the spectrum is refused: "),
    ],
)
def test_a_bad_spectrum_file_is_named(tmp_path: Path, content: str | None, sentence: str) -> None:
    if content is not None:
        (tmp_path / "film.csv").write_text(content, encoding="utf-8")
    (found,) = lines({"coating": [{"key": "c", "spectrum": "film.csv"}]}, folder=tmp_path)
    assert found.startswith(f"coating[0].spectrum: {sentence}")


@pytest.mark.parametrize("row", ["{nm};0,005", "{nm},0.005", "{nm}\t0,005", "{nm} 0.005", "{nm} , 0.005"])
def test_spectrum_files_may_be_written_with_comma_semicolon_tab_or_spaces(tmp_path: Path, row: str) -> None:
    text = "".join(row.format(nm=nm) + "\n" for nm in range(380, 781, 10))
    (tmp_path / "film.csv").write_text(text, encoding="utf-8")
    stock = check_range({"coating": [{"key": "c", "spectrum": "film.csv"}]}, folder=tmp_path)
    assert stock.coating_of("c").spectrum == tuple((float(nm), 0.005) for nm in range(380, 781, 10))


def test_a_name_that_stands_twice_in_the_file_is_refused(tmp_path: Path) -> None:
    path = tmp_path / "range.toml"
    path.write_text('[shop]\nname = "a"\nname = "b"\n', encoding="utf-8")
    with pytest.raises(Faults, match="not TOML"):
        read_range(path)


def test_items_are_found_by_key_or_taken_as_given() -> None:
    stock = builtin_range()
    own = Material(n_e=1.6, abbe=40, density_g_cm3=1.3)
    assert stock.material_of(own) is own
    assert stock.tint_of(None) is None
    tint = stock.tint_of(0.85)
    assert tint is not None
    assert tint.luminous_transmittance == 0.85
    assert stock.scenes_of(None) == stock.scene
    with pytest.raises(UnknownStock, match="nothing-such"):
        stock.design_of("nothing-such")


def test_an_empty_range_object_holds_nothing() -> None:
    assert Range().material == ()
