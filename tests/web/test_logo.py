"""A logo is checked before it is decoded and written anew; hostile files are made here, and none gets through.

Chunks of a PNG and segments of a JPEG are laid out as W3C Portable Network Graphics (Third Edition), 5, and ITU-T T.81,
annex B, say.
"""

import io
import itertools
import random
import struct
import zlib

import pytest
from PIL import Image, ImageDraw, ImageFile
from PIL.PngImagePlugin import PngInfo

from advisor.web import logo as module
from advisor.web.logo import (
    MOST_BYTES,
    LogoBroken,
    LogoHasMore,
    LogoOfOtherKind,
    LogoRefused,
    LogoTooLarge,
    LogoTooManyPixels,
    LogoTooPale,
    logo_from,
)

PNG = b"\x89PNG\r\n\x1a\n"
SCRIPT = b"<script>alert(1)</script>"
RED, INK = (200, 30, 20), (20, 20, 20)


def file_of(picture: Image.Image, kind: str = "PNG", **more: object) -> bytes:
    target = io.BytesIO()
    picture.save(target, kind, **more)
    return target.getvalue()


def plain(width: int = 120, height: int = 60) -> Image.Image:
    """Red on the left, nearly black on the right."""
    picture = Image.new("RGB", (width, height), RED)
    ImageDraw.Draw(picture).rectangle((width // 2, 0, width, height), fill=INK)
    return picture


def chunk(name: bytes, content: bytes) -> bytes:
    return struct.pack(">I", len(content)) + name + content + struct.pack(">I", zlib.crc32(name + content))


def chunks(data: bytes) -> list[bytes]:
    """The names of a PNG's chunks, in order."""
    found, at = [], len(PNG)
    while at < len(data):
        (length,) = struct.unpack(">I", data[at : at + 4])
        found.append(data[at + 4 : at + 8])
        at += 12 + length
    return found


def opened(data: bytes) -> Image.Image:
    return Image.open(io.BytesIO(data), formats=["PNG"])


def is_near(pixel: object, colour: tuple[int, int, int], by: int = 0) -> bool:
    assert isinstance(pixel, tuple)
    return len(pixel) == 3 and all(abs(a - b) <= by for a, b in zip(pixel, colour, strict=True))


# --- what is kept -----------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    "data",
    [file_of(plain()), file_of(plain(), "JPEG", quality=95), file_of(plain(), "JPEG", quality=95, progressive=True)],
    ids=["png", "jpeg", "progressive"],
)
def test_a_picture_is_written_anew_as_a_plain_png(data: bytes) -> None:
    kept = logo_from(data)
    assert set(chunks(kept)) == {b"IHDR", b"IDAT", b"IEND"}
    picture = opened(kept)
    assert (picture.mode, picture.size) == ("RGB", (120, 60))
    assert is_near(picture.getpixel((20, 30)), RED, by=4)  # JPEG's own loss
    assert is_near(picture.getpixel((100, 30)), INK, by=4)
    assert logo_from(kept) == kept


@pytest.mark.parametrize(("size", "kept"), [((1200, 300), (600, 150)), ((400, 1200), (100, 300)), ((80, 40), (80, 40))])
def test_a_large_picture_is_made_smaller_and_keeps_its_shape(size: tuple[int, int], kept: tuple[int, int]) -> None:
    assert opened(logo_from(file_of(plain(*size)))).size == kept


def test_what_hardly_packs_is_made_smaller_still() -> None:
    noise = Image.frombytes("RGB", (560, 300), random.Random(5).randbytes(560 * 300 * 3))  # noqa: S311  # a picture
    kept = logo_from(file_of(noise))
    assert len(kept) <= module.MOST_KEPT_BYTES < len(file_of(noise))
    assert opened(kept).size == (280, 150)


def test_see_through_becomes_white_paper() -> None:
    picture = plain().convert("RGBA")
    picture.paste((0, 0, 0, 0), (0, 0, 40, 60))
    found = opened(logo_from(file_of(picture)))
    assert is_near(found.getpixel((10, 10)), (255, 255, 255))
    assert is_near(found.getpixel((50, 10)), RED)


def test_a_palette_with_a_see_through_colour_becomes_white_paper() -> None:
    picture = Image.new("P", (40, 20), 1)
    picture.putpalette([0, 0, 0, *RED])
    picture.paste(0, (0, 0, 20, 20))
    found = opened(logo_from(file_of(picture, transparency=1)))
    assert is_near(found.getpixel((30, 10)), (255, 255, 255))
    assert is_near(found.getpixel((10, 10)), (0, 0, 0))


def test_inks_of_a_printer_become_the_colours_they_print() -> None:
    # no cyan, all magenta, all yellow: red
    found = opened(logo_from(file_of(Image.new("CMYK", (40, 20), (0, 255, 255, 0)), "JPEG", quality=95)))
    assert is_near(found.getpixel((20, 10)), (255, 0, 0), by=4)


def test_greys_of_sixteen_bits_keep_their_shade() -> None:
    found = opened(logo_from(file_of(Image.new("I;16", (40, 20), 0x8000))))  # half of the whole
    assert is_near(found.getpixel((20, 10)), (128, 128, 128), by=1)


def test_a_picture_that_says_it_lies_on_its_side_stands_upright() -> None:
    turned = Image.Exif()
    turned[0x0112] = 6  # the first row is the right side of what is meant (Exif 2.3, 4.6.4, Orientation)
    found = opened(logo_from(file_of(plain(), "JPEG", exif=turned, quality=95)))
    assert found.size == (60, 120)
    assert is_near(found.getpixel((30, 20)), RED, by=6)
    assert is_near(found.getpixel((30, 100)), INK, by=6)


def test_of_a_moving_picture_the_first_is_kept() -> None:
    second = Image.new("RGB", (120, 60), INK)
    found = opened(logo_from(file_of(plain(), save_all=True, append_images=[second])))
    assert getattr(found, "n_frames", 1) == 1
    assert is_near(found.getpixel((20, 30)), RED)


def test_nothing_but_what_is_seen_is_kept() -> None:
    told = PngInfo()
    told.add_text("Comment", SCRIPT.decode())
    told.add_itxt("XML:com.adobe.xmp", SCRIPT.decode(), zip=True)
    described = Image.Exif()
    described[0x010E] = SCRIPT.decode()  # ImageDescription
    data = file_of(plain(), pnginfo=told, icc_profile=b"profile " + SCRIPT, exif=described, dpi=(300, 300))
    own = data[:33] + chunk(b"scRi", SCRIPT) + data[33:]  # a chunk that nobody knows, behind the head
    assert SCRIPT in own
    kept = logo_from(own)
    assert b"script" not in kept
    assert set(chunks(kept)) == {b"IHDR", b"IDAT", b"IEND"}
    jpeg = file_of(plain(), "JPEG", comment=SCRIPT)
    assert SCRIPT in jpeg
    assert b"script" not in logo_from(jpeg)


# --- what is refused --------------------------------------------------------------------------------------------------


def head_only(width: int, height: int) -> bytes:
    """A PNG of a few hundred bytes that says it is huge."""
    ihdr = struct.pack(">IIBBBBB", width, height, 8, 2, 0, 0, 0)
    return PNG + chunk(b"IHDR", ihdr) + chunk(b"IDAT", zlib.compress(bytes(4096))) + chunk(b"IEND", b"")


def jpeg_saying(width: int, height: int) -> bytes:
    """A JPEG whose head says another size than its content has."""
    data = file_of(plain(), "JPEG")
    at = data.index(b"\xff\xc0") + 5
    return data[:at] + struct.pack(">HH", height, width) + data[at + 4 :]


SVG = b'<svg xmlns="http://www.w3.org/2000/svg" onload="alert(1)"><rect width="9" height="9"/></svg>'
REFUSED: dict[str, tuple[bytes, type[LogoRefused]]] = {
    "svg": (SVG, LogoOfOtherKind),
    "gif": (file_of(plain(), "GIF"), LogoOfOtherKind),
    "webp": (file_of(plain(), "WEBP"), LogoOfOtherKind),
    "tiff": (file_of(plain(), "TIFF"), LogoOfOtherKind),
    "bmp": (file_of(plain(), "BMP"), LogoOfOtherKind),
    "html": (b"<!doctype html>" + file_of(plain()), LogoOfOtherKind),
    "space before": (b" " + file_of(plain()), LogoOfOtherKind),
    "one byte": (b"\x89", LogoOfOtherKind),
    "gif that begins as png": (PNG + file_of(plain(), "GIF"), LogoBroken),
    "png and script": (file_of(plain()) + SCRIPT, LogoHasMore),
    "png and zip": (file_of(plain()) + b"PK\x03\x04", LogoHasMore),
    "jpeg and html": (file_of(plain(), "JPEG") + b"<html>" + SCRIPT, LogoHasMore),
    "jpeg and jpeg": (file_of(plain(), "JPEG") * 2, LogoHasMore),
    "bomb": (head_only(60_000, 60_000), LogoTooManyPixels),
    "one row too many": (head_only(2000, 2001), LogoTooManyPixels),
    "bomb of a jpeg": (jpeg_saying(65_000, 65_000), LogoTooManyPixels),
    "too many bytes": (file_of(plain()) + bytes(MOST_BYTES), LogoTooLarge),
    "no pixels": (head_only(0, 10), LogoBroken),
    "not all there": (head_only(1000, 1000), LogoBroken),
    "no head": (PNG + chunk(b"IDAT", b"") + chunk(b"IEND", b""), LogoBroken),
    "length beyond the end": (PNG + struct.pack(">I", 0xFFFFFFFF) + b"IHDR" + bytes(40), LogoBroken),
    "mark alone": (PNG, LogoBroken),
    "jpeg mark alone": (b"\xff\xd8\xff", LogoBroken),
    "fill to the end": (b"\xff\xd8" + b"\xff" * 100_000, LogoBroken),
    "end without a picture": (b"\xff\xd8\xff\xd9", LogoBroken),
    "white": (file_of(Image.new("RGB", (40, 20), "white")), LogoTooPale),
    "see-through": (file_of(Image.new("RGBA", (40, 20), (0, 0, 0, 0))), LogoTooPale),
}


@pytest.mark.parametrize(("data", "reason"), REFUSED.values(), ids=REFUSED)
def test_what_is_no_plain_picture_is_refused_with_its_reason(
    data: bytes, reason: type[LogoRefused], monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(ImageFile, "LOAD_TRUNCATED_IMAGES", True)  # as the layout of PDF files leaves it
    with pytest.raises(LogoRefused) as caught:
        logo_from(data)
    assert type(caught.value) is reason
    assert str(caught.value).endswith(".")


@pytest.mark.parametrize("name", ["bomb", "one row too many", "bomb of a jpeg", "too many bytes", "png and script"])
def test_what_the_head_tells_is_refused_before_anything_is_decoded(name: str, monkeypatch: pytest.MonkeyPatch) -> None:
    def decoded(_data: bytes) -> Image.Image:
        raise AssertionError("decoded")

    monkeypatch.setattr(module, "_opened", decoded)
    data, reason = REFUSED[name]
    with pytest.raises(reason):
        logo_from(data)


@pytest.mark.parametrize("kind", ["PNG", "JPEG"])
def test_a_picture_cut_off_anywhere_is_refused(kind: str, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(ImageFile, "LOAD_TRUNCATED_IMAGES", True)  # as the layout of PDF files leaves it
    data = file_of(plain(30, 20), kind)
    for end in range(3 if kind == "JPEG" else 8, len(data) - 1, 3):
        with pytest.raises(LogoBroken):
            logo_from(data[:end])


@pytest.mark.parametrize("kind", ["PNG", "JPEG"])
def test_a_picture_with_a_wrong_byte_is_a_picture_or_refused_and_nothing_else(kind: str) -> None:
    data = file_of(plain(30, 20), kind)
    drawn = random.Random(11)  # noqa: S311  # which byte is wrong
    for _ in range(300):
        wrong = bytearray(data)
        wrong[drawn.randrange(len(data))] = drawn.randrange(256)
        try:
            kept = logo_from(bytes(wrong))
        except LogoRefused:
            continue
        assert set(chunks(kept)) == {b"IHDR", b"IDAT", b"IEND"}


def test_a_text_that_unpacks_to_very_much_is_not_unpacked_into_memory() -> None:
    packed = zlib.compress(bytes(200_000_000), 9)
    data = file_of(plain())
    bomb = data[:33] + chunk(b"zTXt", b"Comment\0\0" + packed) + data[33:]
    assert len(bomb) < MOST_BYTES
    with pytest.raises(LogoBroken):
        logo_from(bomb)


def test_every_reason_has_a_sentence_of_its_own() -> None:
    reasons = LogoRefused.__subclasses__()
    assert {reason for _, reason in REFUSED.values()} == set(reasons)
    assert all(a.text != b.text for a, b in itertools.combinations(reasons, 2))
