"""A file from elsewhere, by what stands in it: prescriptions, a visit of ours, or a frame record."""

from advisor.counsel.brought_in import Brought
from advisor.counsel.faults import Faults, fault
from advisor.counsel.fhir_reading import read_prescriptions
from advisor.counsel.files import LARGEST_BYTES, parse_json
from advisor.counsel.frame_record import looks_like_a_record
from advisor.counsel.frame_trace import FrameRecord, read_frame_record
from advisor.counsel.visit import check_visit

OUR_FORMAT = "twolight-visit-"  # and a number


def recognise(content: bytes, *, file: str = "") -> list[Brought] | FrameRecord:
    """Read a file as what it is, whatever its name says; raise :class:`Faults` where it is nothing we read."""
    if len(content) > LARGEST_BYTES:
        raise Faults([fault("too-large", file=file, figures={"limit_mb": LARGEST_BYTES / 1e6})])
    if content.removeprefix(b"\xef\xbb\xbf").lstrip()[:1] in (b"{", b"["):
        return _of_json(content, file)
    if looks_like_a_record(content):
        return read_frame_record(content, file=file)
    raise Faults([fault("not-brought", file=file)])


def _of_json(content: bytes, file: str) -> list[Brought]:
    try:
        text = content.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        raise Faults([fault("not-utf8", file=file)]) from error
    data = parse_json(text, file=file)
    if isinstance(data, dict) and "resourceType" in data:
        return read_prescriptions(data, file=file)
    if isinstance(data, dict) and (str(data.get("format", "")).startswith(OUR_FORMAT) or "prescription" in data):
        return [Brought(check_visit(data, file=file))]
    raise Faults([fault("not-brought", file=file)])
