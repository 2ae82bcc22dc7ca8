"""Takes the property sets of an earlier audit out of the text of a STEP file, so that new ones can replace them.

Another program may have saved the file since: numbers changed, one set put on several elements, several sets in one
relation, properties added. Only what nothing else refers to is removed.
"""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Iterable, Mapping
from dataclasses import dataclass

from ifcaudit.errors import ModelFileError
from ifcaudit.outputs.step_text import StepText, arguments, references

_LAST_REFERENCE = re.compile(rb",\s*#(\d+)\s*\)\s*;\Z")
_FIRST_ARGUMENT = re.compile(rb"[^(]*\(\s*('(?:[^']|'')*')")
_SET = b"IFCPROPERTYSET"
_RELATION = b"IFCRELDEFINESBYPROPERTIES"
_PROPERTIES = (b"IFCPROPERTY", b"IFCCOMPLEXPROPERTY")
# What a property of ours refers to, and nothing else once the property is gone: units written beside the value.
_ACCOMPANYING = frozenset({b"IFCSIUNIT", b"IFCDERIVEDUNIT", b"IFCDERIVEDUNITELEMENT"})


@dataclass(frozen=True, slots=True, kw_only=True)
class Cleared:
    """A text without the sets of an earlier audit.

    Attributes:
        text: What is left.
        added: Element number -> properties that somebody else added to its set, kept in the text to be carried over.
    """

    text: StepText
    added: Mapping[int, tuple[int, ...]]


def clear_sets(text: StepText, set_name: bytes, property_names: frozenset[bytes]) -> Cleared:
    """Remove all property sets of one name, the relations that attach them, and the properties only they use.

    Args:
        text: The file.
        set_name: Name of the sets, as an encoded string with its quotes.
        property_names: Names of the properties that may be removed, encoded likewise; others are carried over.

    Raises:
        ModelFileError: Something refers to a relation that has to go.
        NotAppendableError: Text that is no sequence of statements.
    """
    sets = {
        number: arguments(text.data[entry.start : entry.end])
        for number, entry in text.index.items()
        if entry.keyword == _SET and text.data.find(set_name, entry.start, entry.end) >= 0
    }
    sets = {number: values for number, values in sets.items() if values[2] == set_name}
    if not sets:
        return Cleared(text=text, added={})
    changes, owners = _detach(text, sets)
    counts = Counter(text.reference_counts())
    for number, replacement in changes.items():
        _forget(text, counts, number, replacement)
    free = [number for number in sets if counts[number] == 1]
    kept_properties = _remove(text, counts, changes, free, property_names)
    if held := [number for number in changes if not changes[number] and counts[number]]:
        raise ModelFileError(
            f"the relation #{held[0]} attaches a property set {set_name.decode()} of an earlier audit and another "
            "instance refers to it, so it cannot be replaced; remove the property sets of the earlier audit first"
        )
    added: dict[int, tuple[int, ...]] = {}
    for number in free:
        kept = tuple(item for item in references(sets[number][4]) if item in kept_properties)
        for element in owners.get(number, ()) if kept else ():
            added[element] = tuple(dict.fromkeys((*added.get(element, ()), *kept)))
    return Cleared(text=text.replaced(changes), added=added)


def _detach(text: StepText, sets: Iterable[int]) -> tuple[dict[int, bytes], dict[int, list[int]]]:
    """Return the relations to remove (empty text) or to rewrite, and the elements each set was attached to."""
    ours = frozenset(sets)
    changes: dict[int, bytes] = {}
    owners: dict[int, list[int]] = {}
    for number, entry in text.index.items():
        if entry.keyword != _RELATION:
            continue
        last = _LAST_REFERENCE.search(text.data, entry.start, entry.end)
        if last and int(last[1]) not in ours:
            continue  # the usual relation, of one set that is not ours, needs no closer look
        values = arguments(text.data[entry.start : entry.end])
        definitions = references(values[5])
        attached = ours.intersection(definitions)
        for item in attached:
            owners.setdefault(item, []).extend(references(values[4]))
        if attached:
            rest = [item for item in definitions if item not in ours]
            changes[number] = _relation_with(number, values, rest) if rest else b""
    return changes, owners


def _relation_with(number: int, values: list[bytes], definitions: list[int]) -> bytes:
    """Write a relation with several definitions (IFC4: IfcPropertySetDefinitionSet) anew, without ours."""
    several = b"IFCPROPERTYSETDEFINITIONSET((%s))" % b",".join(b"#%d" % item for item in definitions)
    return b"#%d=%s(%s);" % (number, _RELATION, b",".join((*values[:5], several)))


def _forget(text: StepText, counts: Counter[int], number: int, replacement: bytes) -> None:
    entry = text.index[number]
    for item in references(text.data[entry.start : entry.end]):
        counts[item] -= 1
    for item in references(replacement):
        counts[item] += 1


def _remove(
    text: StepText, counts: Counter[int], changes: dict[int, bytes], free: list[int], property_names: frozenset[bytes]
) -> set[int]:
    """Mark sets for removal, then what only they use; return the properties of other names, which stay."""
    foreign: set[int] = set()
    waiting = list(free)
    while waiting:
        number = waiting.pop()
        if number in changes:
            continue
        entry = text.index[number]
        statement = text.data[entry.start : entry.end]
        _forget(text, counts, number, b"")
        changes[number] = b""
        if statement.count(b"#") == 1:
            continue  # most properties refer to nothing
        in_set = entry.keyword == _SET
        for item in references(arguments(statement)[4] if in_set else statement.partition(b"=")[2]):
            if item not in text.index or item in changes:
                continue
            used = text.index[item]
            if in_set and not _is_ours(text, item, property_names):
                foreign.add(item)
            elif counts[item] == 1 and (used.keyword.startswith(_PROPERTIES) or used.keyword in _ACCOMPANYING):
                waiting.append(item)
    return foreign


def _is_ours(text: StepText, number: int, property_names: frozenset[bytes]) -> bool:
    entry = text.index[number]
    first = _FIRST_ARGUMENT.match(text.data, entry.start, entry.end)
    return first is not None and first[1] in property_names
