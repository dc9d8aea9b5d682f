"""What the parts of a pair are called: as the shop calls them, or, given in place without a name, by what they are."""

from advisor.counsel.phrases import Translator, mark
from advisor.counsel.stock_items import IN_PLACE, Coating, Material, Tint

OWN_MATERIAL = mark("own material n %(index)s")
OWN_COATING = mark("own coating")
TINT_OF = mark("tint %(percent)s %%")


def material_name(material: Material, translator: Translator) -> str:
    """Return what a material is called: "own material n 1.60" where a visit gave it without a name."""
    if material.label or material.key != IN_PLACE:
        return material.label or material.key
    return translator.gettext(OWN_MATERIAL) % {"index": translator.number(material.index, digits=2)}


def coating_name(coating: Coating, translator: Translator) -> str:
    """Return what a coating is called: "own coating" where a visit gave it without a name."""
    if coating.label or coating.key != IN_PLACE:
        return coating.label or coating.key
    return translator.gettext(OWN_COATING)


def tint_name(tint: Tint, translator: Translator) -> str:
    """Return what a tint is called: "tint 85 %" where it has no name but its figure."""
    if tint.label:
        return tint.label
    percent = translator.number(100.0 * tint.luminous_transmittance, digits=0)
    return translator.gettext(TINT_OF) % {"percent": percent}
