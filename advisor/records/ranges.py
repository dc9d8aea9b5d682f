"""What the shop sold and when: each distinct range text is kept once, and one of them is the present one."""

import hashlib
from dataclasses import dataclass

from sqlalchemy import Connection, delete, insert, select
from sqlalchemy.exc import IntegrityError

from advisor.records import tables

CURRENT = "current-range"


@dataclass(frozen=True)
class RangeVersion:
    """A range file as it was saved."""

    hash: str
    toml: str
    saved_at: str


def content_hash(toml: str) -> str:
    """Return the SHA-256 of the text in UTF-8, hexadecimal."""
    return hashlib.sha256(toml.encode()).hexdigest()


def keep(connection: Connection, toml: str) -> str:
    """Store the text unless it is there already; return its hash."""
    key = content_hash(toml)
    known = select(tables.range_version.c.hash).where(tables.range_version.c.hash == key)
    if connection.execute(known).first() is None:
        try:
            with connection.begin_nested():
                row = {"hash": key, "toml": toml, "saved_at": tables.now()}
                connection.execute(insert(tables.range_version).values(row))
        except IntegrityError:  # on a server another shop desk may have stored the same text meanwhile
            if connection.execute(known).first() is None:
                raise
    return key


def find(connection: Connection, key: str) -> RangeVersion | None:
    """Return the range of this hash."""
    row = connection.execute(select(tables.range_version).where(tables.range_version.c.hash == key)).first()
    return RangeVersion(*row) if row else None


def setting(connection: Connection, key: str) -> str | None:
    """Return a setting."""
    return connection.execute(select(tables.setting.c.value).where(tables.setting.c.key == key)).scalar()


def set_setting(connection: Connection, key: str, value: str) -> None:
    """Store a setting over the one before."""
    connection.execute(delete(tables.setting).where(tables.setting.c.key == key))
    connection.execute(insert(tables.setting).values(key=key, value=value))
