"""What the parts of a pair are called: as the shop calls them, or, given in place without a name, by what they are.

What the built-in range calls its items is found for translation; a shop's own name has none and stays as it is.
"""

from advisor.counsel.phrases import Translator, mark
from advisor.counsel.stock_items import IN_PLACE, Coating, Item, Material, Scene, Tint

OWN_MATERIAL = mark("own material n %(index)s")
OWN_COATING = mark("own coating")
TINT_OF = mark("tint %(percent)s %%")


def called(item: Item | Scene, translator: Translator) -> str:
    """Return what an item or a scene of the range is called; without a name, its key or what it is."""
    if isinstance(item, Material):
        return material_name(item, translator)
    if isinstance(item, Coating):
        return coating_name(item, translator)
    if isinstance(item, Tint):
        return tint_name(item, translator)
    return _label(item, translator)


def _label(item: Item | Scene, translator: Translator) -> str:
    return translator.gettext(item.label) if item.label else item.key


def material_name(material: Material, translator: Translator) -> str:
    """Return what a material is called: "own material n 1.60" where a visit gave it without a name."""
    if material.label or material.key != IN_PLACE:
        return _label(material, translator)
    return translator.gettext(OWN_MATERIAL) % {"index": translator.number(material.index, digits=2)}


def coating_name(coating: Coating, translator: Translator) -> str:
    """Return what a coating is called: "own coating" where a visit gave it without a name."""
    if coating.label or coating.key != IN_PLACE:
        return _label(coating, translator)
    return translator.gettext(OWN_COATING)


def tint_name(tint: Tint, translator: Translator) -> str:
    """Return what a tint is called: "tint 85 %" where it has no name but its figure."""
    if tint.label:
        return _label(tint, translator)
    percent = translator.number(100.0 * tint.luminous_transmittance, digits=0)
    return translator.gettext(TINT_OF) % {"percent": percent}
