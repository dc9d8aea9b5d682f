"""A picture's bytes as a PNG: eight bits a channel, red, green and blue, no interlace, rows without a filter.

Portable Network Graphics (PNG) Specification, third edition (W3C 2025): signature, IHDR, IDAT, IEND; filter type 0.
Flat pictures come out as small without a filter as with one.
"""

import struct
import zlib

_SIGNATURE = b"\x89PNG\r\n\x1a\n"
_EIGHT_BITS, _TRUECOLOUR = 8, 2
_NO_FILTER = b"\0"
_LEVEL = 6


def encode_png(rgb: bytes, *, width: int, height: int) -> bytes:
    """Return the file of a picture given as rows of red, green and blue bytes from the upper left.

    Raises
    ------
    ValueError
        If the bytes are not that many.
    """
    line = 3 * width
    if width < 1 or height < 1 or len(rgb) != line * height:
        raise ValueError("rgb must have 3 bytes for each of width x height pixels, one or more")
    rows = b"".join(_NO_FILTER + rgb[start : start + line] for start in range(0, len(rgb), line))
    header = struct.pack(">IIBBBBB", width, height, _EIGHT_BITS, _TRUECOLOUR, 0, 0, 0)
    parts = ((b"IHDR", header), (b"IDAT", zlib.compress(rows, _LEVEL)), (b"IEND", b""))
    return _SIGNATURE + b"".join(_chunk(kind, content) for kind, content in parts)


def _chunk(kind: bytes, content: bytes) -> bytes:
    return struct.pack(">I", len(content)) + kind + content + struct.pack(">I", zlib.crc32(kind + content))
