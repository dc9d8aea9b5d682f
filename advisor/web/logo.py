"""The shop's logo: a picture that somebody sends, checked before it is decoded, and written anew as a plain PNG.

Nothing of the file that was sent is kept but what can be seen. What is no PNG or JPEG by its content, goes on behind
its own end, or says that it is too large, is refused before the decoder (Pillow, imported when first used) sees it.
Chunks and segments: W3C Portable Network Graphics (Third Edition), 5; ITU-T T.81, annex B.
"""

from io import BytesIO
from typing import TYPE_CHECKING

from advisor.counsel.phrases import mark
from advisor.errors import TwolightError

if TYPE_CHECKING:
    from PIL.Image import Image

ADDRESS = "/shop/logo.png"
MOST_BYTES = 1024 * 1024
MOST_PIXELS = 4_000_000
BOX_PX = (600, 300)  # what is kept fits in here: twice as fine as 18 mm of paper need
MOST_KEPT_BYTES = 300_000  # 400 kB in the records, where it stands as text
PALEST = 235  # of 255: a picture whose darkest place is lighter hardly shows on white paper
_PNG = b"\x89PNG\r\n\x1a\n"
_JPEG = b"\xff\xd8\xff"
_SIZES = frozenset(range(0xC0, 0xD0)) - {0xC4, 0xC8, 0xCC}  # JPEG's markers of a frame, which tell its size
_END = 0xD9  # JPEG's marker behind the picture
_ALONE = frozenset({0x01, *range(0xD0, 0xD8)})  # JPEG's markers without a length


class LogoRefused(TwolightError):
    """A picture cannot be the shop's logo."""

    text = mark("This picture cannot be used.")


class LogoTooLarge(LogoRefused):
    """The file has too many bytes."""

    text = mark("The picture is larger than 1 MB; save a smaller one.")


class LogoTooManyPixels(LogoRefused):
    """The picture has too many pixels."""

    text = mark("The picture has more than 4 million pixels; save a smaller one.")


class LogoOfOtherKind(LogoRefused):
    """The content is neither PNG nor JPEG."""

    text = mark("Only PNG and JPEG can be used, whatever the file is called; save the picture as PNG.")


class LogoHasMore(LogoRefused):
    """Something else follows the picture in the file."""

    text = mark("Something else stands in the file behind the picture; save the picture alone, as PNG.")


class LogoBroken(LogoRefused):
    """The picture ends early or cannot be decoded."""

    text = mark("The picture is broken or cut off; save it once more.")


class LogoTooPale(LogoRefused):
    """White or nearly so, it would not show on paper."""

    text = mark("The picture would hardly show on white paper; take one with dark lines.")


def logo_from(data: bytes) -> bytes:
    """Return the picture of a file that was sent as a small opaque PNG without anything else in it.

    Transparency becomes white paper, turned pictures stand upright, of a moving picture the first one is kept.
    Colours are read as sRGB, whatever profile the file names.

    Raises
    ------
    LogoRefused
        One of its subclasses, by the reason.
    """
    if len(data) > MOST_BYTES:
        raise LogoTooLarge
    if data.startswith(_PNG):
        width, height, end = _png_extent(data)
    elif data.startswith(_JPEG):
        width, height, end = _jpeg_extent(data)
    else:
        raise LogoOfOtherKind
    if width * height > MOST_PIXELS:
        raise LogoTooManyPixels
    if data[end:].strip(b"\0"):
        raise LogoHasMore
    return _written(_opened(data[:end]))


def _number(data: bytes, at: int, size: int) -> int:
    part = data[at : at + size]
    if len(part) < size:
        raise LogoBroken
    return int.from_bytes(part, "big")


def _png_extent(data: bytes) -> tuple[int, int, int]:
    """Return width, height and where the picture ends: chunk by chunk, each a length, a name, content and a sum."""
    if data[12:16] != b"IHDR":
        raise LogoBroken
    width, height, at = _number(data, 16, 4), _number(data, 20, 4), len(_PNG)
    while True:
        length, name = _number(data, at, 4), data[at + 4 : at + 8]
        at += 12 + length
        if at > len(data):
            raise LogoBroken
        if name == b"IEND":
            return width, height, at


def _jpeg_extent(data: bytes) -> tuple[int, int, int]:
    """Return width, height and where the picture ends: segment by segment, with coded light between them."""
    width, height, at = 0, 0, 2
    while (at := data.find(b"\xff", at)) >= 0:
        while data[at + 1 : at + 2] == b"\xff":  # fill
            at += 1
        kind = _number(data, at + 1, 1)
        at += 2
        if kind == _END and width and height:
            return width, height, at
        if kind == 0 or kind in _ALONE:  # a 255 of the coded light itself, or a restart in it
            continue
        if kind in _SIZES:
            height, width = max(height, _number(data, at + 3, 2)), max(width, _number(data, at + 5, 2))
        at += _number(data, at, 2)
    raise LogoBroken


def _opened(data: bytes) -> "Image":
    """Return the decoded picture, upright and on white."""
    from PIL import Image, ImageFile, ImageOps

    ImageFile.LOAD_TRUNCATED_IMAGES = False  # WeasyPrint turns it on for the whole program, and never needs it here
    try:
        with Image.open(BytesIO(data), formats=["PNG", "JPEG"]) as found:
            if found.width * found.height > MOST_PIXELS:
                raise LogoTooManyPixels
            upright = ImageOps.exif_transpose(_eight_bits(found))
            if upright.mode == "CMYK":
                upright = upright.convert("RGB")
            seen = upright.convert("RGBA")
            paper = Image.new("RGBA", seen.size, "white")
            return Image.alpha_composite(paper, seen).convert("RGB")
    except LogoRefused:
        raise
    except Exception as error:  # a broken file makes the decoder raise whatever it likes
        raise LogoBroken from error


def _eight_bits(found: "Image") -> "Image":
    """Return greys of sixteen bits as greys of eight, which a plain conversion would cut off instead."""
    return found.convert("I").point(lambda grey: grey / 256).convert("L") if found.mode.startswith("I") else found


def _written(picture: "Image") -> bytes:
    """Return the picture as PNG, made smaller until it fits."""
    darkest, _ = picture.convert("L").getextrema()
    if isinstance(darkest, tuple) or darkest > PALEST:
        raise LogoTooPale
    picture.thumbnail(BOX_PX)
    while True:
        target = BytesIO()
        picture.save(target, "PNG", optimize=True)
        if target.tell() <= MOST_KEPT_BYTES:
            return target.getvalue()
        picture = picture.reduce(2)
