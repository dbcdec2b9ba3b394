"""Bytes to text: gzip archives, byte-order marks, UTF-8 and UTF-16."""

from __future__ import annotations

import io

from lpview.blocks.mistakes import InputError, Mistake

MOST_BYTES = 2**30
"""Bytes that a gzip archive may hold: a small one could unpack to more than memory holds."""

_GZIP = b"\x1f\x8b"
_CHUNK = 2**20
_ADVICE = "export it as CSV in UTF-8"
_NO_TEXT = {
    b"PK\x03\x04": "a zip archive or spreadsheet file",
    b"\xd0\xcf\x11\xe0": "a spreadsheet file",
    _GZIP: "a gzip archive inside another one",
    b"\xff\xfe\0\0": "UTF-32",
    b"\0\0\xfe\xff": "UTF-32",
}
_MARKS = {b"\xef\xbb\xbf": "utf-8", b"\xff\xfe": "utf-16-le", b"\xfe\xff": "utf-16-be"}


def text_of(data: bytes, file: str) -> str:
    """The text in ``data`` without byte-order mark.

    Raises `InputError` unless it is UTF-8, or UTF-16 with a byte-order mark, either
    of which may be packed by gzip.
    """
    if data.startswith(_GZIP):
        data = unpacked(data, file)
    elif file.casefold().endswith(".gz") and data:
        advice = "take .gz off its name if it is not packed"
        raise InputError([Mistake(file, "a gzip archive", "other data", advice=advice)])
    for start, kind in _NO_TEXT.items():
        if data.startswith(start):
            raise _no_text(file, kind)
    mark = next(filter(data.startswith, _MARKS), b"")
    if not mark and b"\0" in data and _is_wide(data):
        raise _no_text(file, "UTF-16 without a byte-order mark")
    return _decoded(data[len(mark) :], _MARKS.get(mark, "utf-8"), file)


def unpacked(data: bytes, file: str) -> bytes:
    """What a gzip archive holds, up to `MOST_BYTES`. Raises `InputError`."""
    import gzip  # only for what is packed
    import zlib

    parts: list[bytes] = []
    expected, got, advice = "a whole gzip archive", "a broken one", "pack it or copy it again"
    try:
        with gzip.GzipFile(fileobj=io.BytesIO(data)) as archive:
            left = MOST_BYTES
            while left >= 0 and (chunk := archive.read(_CHUNK)):
                parts.append(chunk)
                left -= len(chunk)
        if left >= 0:
            return b"".join(parts)
        expected = f"a gzip archive of at most {MOST_BYTES:,} bytes once unpacked"
        got, advice = "a larger one", "unpack it first"
    except EOFError:
        got = "one that ends too early"
    except (OSError, zlib.error):
        pass  # a broken one
    raise InputError([Mistake(file, expected, got, advice=advice)])


def _is_wide(data: bytes) -> bool:
    """Whether every other byte of the beginning is mostly zero and its neighbours never."""
    even, odd = data[:1000:2], data[1:1000:2]
    return any(2 * a.count(0) > len(a) and not b.count(0) for a, b in ((even, odd), (odd, even)))


def _decoded(data: bytes, encoding: str, file: str) -> str:
    if encoding == "utf-8" and b"\0" in data:
        before = data[: data.index(b"\0")].decode(errors="replace")
        raise _no_text(file, "binary data", before)
    try:
        text = data.decode(encoding)
    except UnicodeDecodeError as error:
        before = data[: error.start].decode(encoding)
        is_wide = encoding != "utf-8"
        got = "broken UTF-16" if is_wide else f"the byte 0x{data[error.start]:02x}"
        raise _no_text(file, got, before) from None
    if "\0" in text:
        raise _no_text(file, "binary data", text[: text.index("\0")])
    return text


def _no_text(file: str, got: str, before: str | None = None) -> InputError:
    """What to say about bytes that are no text, on the line after the text ``before``."""
    ends = (before or "").replace("\r\n", "\n")
    line = 0 if before is None else ends.count("\n") + ends.count("\r") + 1
    return InputError([Mistake(file, "UTF-8 text", got, line, advice=_ADVICE)])
