"""The shop's range, parsed once for each text; the built-in one where the shop has saved none."""

from dataclasses import dataclass
from functools import cache, lru_cache
from weakref import WeakKeyDictionary

from advisor.counsel.stock import Range, builtin_range, parse_range, range_to_toml
from advisor.records.ranges import content_hash
from advisor.records.store import Store


@dataclass(frozen=True)
class Shelf:
    """A range with the text it is stored as, and the hash by which an editor tells that nobody changed it."""

    stock: Range
    toml: str
    hash: str


_last: WeakKeyDictionary[Store, Shelf] = WeakKeyDictionary()


@lru_cache(maxsize=8)
def _parsed(toml: str) -> Shelf:
    return Shelf(parse_range(toml), toml, content_hash(toml))


@cache
def _builtin() -> Shelf:
    stock = builtin_range()
    toml = range_to_toml(stock)
    return Shelf(stock, toml, content_hash(toml))


def current_shelf(store: Store) -> Shelf:
    """Return what the shop sells now."""
    current = store.current_range()
    shelf = _builtin() if current is None else _parsed(current.toml)
    _last[store] = shelf
    return shelf


def last_shelf(store: Store | None) -> Shelf:
    """Return what the shop sold when it was last looked up; the records themselves are not asked."""
    return _builtin() if store is None else _last.get(store, _builtin())


def shelf_of(store: Store, key: str) -> Shelf:
    """Return the range a visit was saved with."""
    version = store.get_range(key)
    return current_shelf(store) if version is None else _parsed(version.toml)
