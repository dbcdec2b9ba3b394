"""Bytes to the lines of an MPS file: archives, encoding, line ends."""

from __future__ import annotations

import os
import re
import zlib
from pathlib import Path

from lpview.blocks.encoding import unpacked
from lpview.blocks.mistakes import InputError, Mistake
from lpview.mps.sections import SECTIONS, UNSUPPORTED

_GZIP = b"\x1f\x8b"
_ENOUGH = 1 << 16
"""Bytes of an archive that are looked at to tell what it holds."""
_FIRST_WORD = re.compile(rb"(?:\xef\xbb\xbf)?(?:(?:\*[^\r\n]*|[ \t]*)[\r\n]+)*([A-Z0-9]+)(?=\s|\Z)")
_KINDS = {b"PK\x03\x04": "a zip archive", b"\xff\xfe": "UTF-16", b"\xfe\xff": "UTF-16"}


def looks_like_mps(data: bytes) -> bool:
    """Whether the first line that is no comment and not blank begins with a section word."""
    if data.startswith(_GZIP):
        try:
            data = zlib.decompressobj(wbits=31).decompress(data, _ENOUGH)
        except zlib.error:
            return False
    found = _FIRST_WORD.match(data)
    return found is not None and found[1].decode() in {*SECTIONS, *UNSUPPORTED}


def model_name(path: str | Path) -> str:
    """Name of the model in a file: the file's own without its endings."""
    name = Path(os.path.abspath(path))  # noqa: PTH100 - "." and ".." get a name
    return Path(name.stem).stem if name.suffix.casefold() == ".gz" else name.stem


def text_of(data: bytes, file: str) -> str:
    """The text in ``data``, each line ended by a line feed. Raises `InputError`.

    Bytes that are not UTF-8 are kept as lone surrogates, which no name may hold:
    comments are often in another encoding, and nothing depends on them.
    """
    if data.startswith(_GZIP):
        data = unpacked(data, file)
    for start, kind in _KINDS.items():
        if data.startswith(start):
            raise InputError([Mistake(file, "UTF-8 text", kind)])
    if b"\0" in data:
        line = data.count(b"\n", 0, data.index(b"\0")) + 1
        raise InputError([Mistake(file, "UTF-8 text", "binary data", line)])
    text = data.decode("utf-8-sig", "surrogateescape")
    if not text.strip():
        raise InputError([Mistake(file, "a linear program", "an empty file")])
    return text.replace("\r\n", "\n").replace("\r", "\n") if "\r" in text else text
