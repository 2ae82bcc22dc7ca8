"""Reads just enough of a STEP file (ISO 10303-21) to add to it and cut from it, keeping every other byte.

Knows strings, comments and statements; knows nothing of what they mean.
"""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Iterator, Mapping
from functools import cached_property
from typing import NamedTuple

# ``\S\'`` is one character (a shifted apostrophe), not the end of the string: ISO 10303-21, 6.4.3.
_STRING = rb"'(?:[^'\\]++|\\\\|\\S\\[\s\S]|\\)*+'"
_COMMENT = rb"/\*[\s\S]*?\*/"
_GAP = rb"(?:\s++|" + _COMMENT + rb")*+"
_STATEMENT = re.compile(
    _GAP + rb"(?P<whole>(?:#(?P<number>\d+)" + _GAP + rb"=" + _GAP + rb"(?P<keyword>\w*))?"
    rb"(?:[^;'/]++|" + _STRING + rb"|" + _COMMENT + rb"|/)*+;)"
)
_STRINGS_AND_COMMENTS = re.compile(_STRING + rb"|" + _COMMENT)
_NUMBERED = re.compile(rb";\s*#(\d+)\s*=")
_DEFINITION = re.compile(rb"#(\d+)\s*=")
_REFERENCE = re.compile(rb"#(\d+)")
_ARGUMENT = re.compile(rb"[^,()'/]++|" + _STRING + rb"|" + _COMMENT + rb"|[,()/]")
_DATA = re.compile(rb";" + _GAP + rb"DATA\s*(?:\([^;]*\))?\s*;")
_TAIL = re.compile(rb"ENDSEC\s*;" + _GAP + rb"END-ISO-10303-21\s*;[\s\x00\x1a]*\Z")
_SCHEMA = re.compile(rb"FILE_SCHEMA\s*\(\s*\(\s*'([^']*)'")


class NotAppendableError(ValueError):
    """The text is no STEP file of the usual form; a library that reads it has to write it anew first."""


class Statement(NamedTuple):
    """Where an instance stands in the text: keyword in capitals, first byte, one past its semicolon."""

    keyword: bytes
    start: int
    end: int


def arguments(statement: bytes) -> list[bytes]:
    """Split the arguments of an instance at the outermost commas.

    Example:
        >>> arguments(b"#5=IFCPROPERTYSET('a,(b',$,'N',$,(#1,#2));")
        [b"'a,(b'", b'$', b"'N'", b'$', b'(#1,#2)']
    """
    parts: list[bytes] = []
    depth, current = 0, b""
    for token in _ARGUMENT.findall(statement, statement.index(b"(")):
        if token == b")":
            depth -= 1
            if depth == 0:
                break
        if depth == 1 and token == b",":
            parts.append(current.strip())
            current = b""
        elif depth > 0 and not token.startswith(b"/*"):
            current += token
        if token == b"(":
            depth += 1
    parts.append(current.strip())
    return parts


def references(text: bytes) -> list[int]:
    """Return the instance numbers a piece of a statement refers to, in order; strings and comments do not count.

    Example:
        >>> references(b"('see #9',#1,(#2,#1))")
        [1, 2, 1]
    """
    if text.count(b"#") == 1 and (alone := _DEFINITION.match(text)):
        return [int(alone[1])]  # an instance that refers to nothing needs no closer look
    if b"'" in text or b"/*" in text:
        text = _STRINGS_AND_COMMENTS.sub(b"", text)
    return [int(number) for number in _REFERENCE.findall(text)]


def real(value: float) -> str:
    """Write a real number: a point always, 12 significant digits.

    Example:
        >>> real(9000.0), real(0.1 + 0.2), real(1e-7), real(-0.0)
        ('9000.', '0.3', '1.E-07', '0.')
    """
    text = f"{value + 0.0:.12g}"
    if "e" in text:
        digits, _, power = text.partition("e")
        return f"{digits if '.' in digits else digits + '.'}E{power}"
    return text if "." in text else text + "."


class StepText:
    """The bytes of a STEP file, and where its instances are.

    Args:
        data: The whole file.

    Raises:
        NotAppendableError: The file does not end with ``ENDSEC;`` and ``END-ISO-10303-21;``, or holds no data section.
    """

    def __init__(self, data: bytes) -> None:
        self.data = data
        self.end = data.rfind(b"ENDSEC")
        if self.end < 0 or not _TAIL.match(data, self.end) or not _DATA.search(data, 0, self.end):
            raise NotAppendableError("no data section that ends with ENDSEC; and END-ISO-10303-21;")
        self._cursor = 0
        # A comment may hide an instance, or show one that is none: then only the whole index tells the truth.
        self._indexed = b"/*" in data

    @property
    def newline(self) -> bytes:
        """The line end the file uses."""
        return b"\r\n" if b"\r\n" in self.data[:4096] else b"\n"

    @property
    def schema(self) -> str:
        """The schema its header names, in capitals; empty when it names none."""
        match = _SCHEMA.search(self.data, 0, 1 << 20)
        return match[1].decode("latin-1").strip().upper() if match else ""

    @cached_property
    def numbers(self) -> frozenset[int]:
        """The numbers of all instances."""
        if self._indexed:
            return frozenset(self.index)
        return frozenset(map(int, _NUMBERED.findall(self.data)))

    @property
    def highest(self) -> int:
        """The highest instance number; 0 in an empty file."""
        return max(self.numbers, default=0)

    @cached_property
    def index(self) -> Mapping[int, Statement]:
        """Every instance by its number. Costs about as much as opening the file.

        Raises:
            NotAppendableError: Text that is no sequence of statements.
        """
        self._indexed = True
        found: dict[int, Statement] = {}
        position = 0
        for match in _STATEMENT.finditer(self.data):
            if match.start() != position:
                raise NotAppendableError(f"text at byte {position} is no statement")
            position = match.end()
            whole, number, keyword = match.group(1, 2, 3)
            if number is not None:
                found[int(number)] = Statement(keyword.upper(), position - len(whole), position)
        return found

    def statement(self, number: int) -> bytes:
        """Return the text of one instance, empty when there is none; quickest in the order of the file."""
        if not self._indexed:
            at = self.data.find(b"#%d=" % number, self._cursor)
            match = _STATEMENT.match(self.data, at) if at >= 0 else None
            if match and match["keyword"]:
                self._cursor = at
                return match["whole"]
        entry = self.index.get(number)
        return self.data[entry.start : entry.end] if entry else b""

    def rewind(self) -> None:
        """Let :meth:`statement` start looking at the beginning of the file again."""
        self._cursor = 0

    def argument(self, number: int, position: int) -> bytes:
        """Return one argument of an instance; empty when it has fewer, or is absent."""
        values = arguments(statement) if (statement := self.statement(number)) else []
        return values[position] if position < len(values) else b""

    def first(self, keyword: bytes) -> int | None:
        """Return the number of the first instance with a keyword (in capitals), ``None`` when there is none."""
        if self._indexed:
            return next((number for number, entry in self.index.items() if entry.keyword == keyword), None)
        pattern = re.compile(rb"#(\d+)\s*=\s*" + keyword + rb"\s*\(")
        at = self.data.find(keyword)
        while at >= 0:
            if match := pattern.match(self.data, self.data.rfind(b"#", 0, at)):
                return int(match[1])
            at = self.data.find(keyword, at + 1)
        return None

    def closure(self, roots: list[int]) -> Iterator[bytes]:
        """Yield the statements of some instances and of everything they refer to."""
        seen: set[int] = set()
        waiting = list(roots)
        while waiting:
            number = waiting.pop()
            if number not in seen:
                seen.add(number)
                self.rewind()
                if text := self.statement(number):
                    yield text
                    waiting.extend(references(text.partition(b"=")[2]))

    def reference_counts(self) -> Mapping[int, int]:
        """Return how often each number is written in the file, its own definition included."""
        return Counter(references(self.data))

    def replaced(self, changes: Mapping[int, bytes]) -> StepText:
        """Return the text with some instances replaced; an empty replacement removes one together with its line end."""
        pieces: list[bytes] = []
        position = 0
        for start, end, text in sorted((*self.index[number][1:], text) for number, text in changes.items()):
            pieces += (self.data[position:start], text)
            position = end if text else self._past_line_end(end)
        pieces.append(self.data[position:])
        return StepText(b"".join(pieces))

    def _past_line_end(self, position: int) -> int:
        if self.data.startswith(b"\r\n", position):
            return position + 2
        return position + 1 if self.data.startswith(b"\n", position) else position
