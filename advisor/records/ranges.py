"""What the shop sold and when: each distinct range text is kept once, and one of them is the present one."""

import base64
import hashlib
from dataclasses import dataclass

from sqlalchemy import Connection, delete, insert, select, update
from sqlalchemy.exc import IntegrityError

from advisor.records import tables

CURRENT = "current-range"
LOGO = "logo"


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
    change = update(tables.setting).where(tables.setting.c.key == key).values(value=value)
    if connection.execute(change).rowcount == 0:
        try:
            with connection.begin_nested():
                connection.execute(insert(tables.setting).values(key=key, value=value))
        except IntegrityError:  # on a server another desk may have set it first meanwhile
            connection.execute(change)


def logo(connection: Connection) -> bytes | None:
    """Return the shop's logo, which is stored as text."""
    text = setting(connection, LOGO)
    return base64.b64decode(text, validate=True) if text else None


def set_logo(connection: Connection, picture: bytes) -> None:
    """Store a logo over the one before; an empty one leaves none."""
    if picture:
        set_setting(connection, LOGO, base64.b64encode(picture).decode())
    else:
        connection.execute(delete(tables.setting).where(tables.setting.c.key == LOGO))
