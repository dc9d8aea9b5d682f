"""Writing plain content as TOML: lists of items as tables one below the other, everything inside them in place."""

from collections.abc import Mapping
from typing import Any

import tomlkit
from tomlkit.items import InlineTable, Table

_WIDE = 4  # lists of more pairs than this go one to a line


def _value(value: Any) -> Any:
    """Turn lists and nested objects into TOML written in place."""
    if isinstance(value, Mapping):
        inline: InlineTable = tomlkit.inline_table()
        for name, inner in value.items():
            inline[name] = _value(inner)
        return inline
    if isinstance(value, list | tuple):
        array = tomlkit.array()
        for inner in value:
            array.append(_value(inner))
        nested = bool(value) and isinstance(value[0], Mapping | list | tuple)
        return array.multiline(nested and len(value) > _WIDE)
    return value


def _table(fields: Mapping[str, Any]) -> Table:
    table = tomlkit.table()
    for name, value in fields.items():
        table[name] = _value(value)
    return table


def toml_text(sections: Mapping[str, Any]) -> str:
    """Write sections, each an object or a list of objects; an empty list is stated, not left out."""
    document = tomlkit.document()
    for name, content in sections.items():  # before the first table, or they would belong to it
        if not content and not isinstance(content, Mapping):
            document[name] = tomlkit.array()
    for name, content in sections.items():
        if isinstance(content, Mapping):
            document[name] = _table(content)
        elif content:
            tables = tomlkit.aot()
            for item in content:
                tables.append(_table(item))
            document[name] = tables
    return tomlkit.dumps(document)
