"""The encoder against another reader, Pillow."""

import io

import pytest
from hypothesis import given
from hypothesis import strategies as st
from PIL import Image

from advisor.web.png import encode_png


@given(st.integers(1, 9), st.integers(1, 9), st.data())
def test_pillow_reads_back_the_same_bytes(width: int, height: int, data: st.DataObject) -> None:
    rgb = data.draw(st.binary(min_size=3 * width * height, max_size=3 * width * height))
    picture = Image.open(io.BytesIO(encode_png(rgb, width=width, height=height)))
    assert (picture.format, picture.size, picture.mode) == ("PNG", (width, height), "RGB")
    picture.load()  # checks the sums of all chunks
    assert picture.tobytes() == rgb


@pytest.mark.parametrize(("count", "width", "height"), [(11, 2, 2), (13, 2, 2), (0, 0, 4), (0, 4, 0)])
def test_bytes_that_are_no_picture_are_refused(count: int, width: int, height: int) -> None:
    with pytest.raises(ValueError, match="rgb must have"):
        encode_png(bytes(count), width=width, height=height)
