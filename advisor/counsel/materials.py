"""Kinds of lens material that wearers and workshops must be warned of, told by their figures or by their names."""

from advisor.counsel.stock_items import Material

GLASS_FROM_G_CM3 = 2.0  # no lens resin is as heavy
HEAT_SOFT_FROM_INDEX = 1.70  # common practice, no source


def is_glass(material: Material) -> bool:
    """Tell glass by its density: no lens resin reaches 2 g/cm3."""
    return material.density_g_cm3 >= GLASS_FROM_G_CM3


def is_polycarbonate(material: Material) -> bool:
    """Tell polycarbonate by what it is called, or as the tough material of its index and Abbe number."""
    named = "polycarbonate" in f"{material.key} {material.label or ''}".lower()
    return named or bool(material.tough and 1.57 <= material.index <= 1.61 and material.abbe <= 32.0)


def softens_with_heat(material: Material) -> bool:
    """Tell the resins of very high index, which heat softens."""
    return material.index >= HEAT_SOFT_FROM_INDEX and not is_glass(material)
