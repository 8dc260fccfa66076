"""Numbers for names, in bulk: equal words get equal numbers, exactly.

Takes a text and where its words stand, gives a number for each word and the words themselves when asked.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

_MULTIPLIER = np.uint64(0x9E3779B97F4A7C15)
_FINISHER = np.uint64(0xD6E8FEB86659FD93)
_LONG = np.uint64(1 << 63)
_SHIFT = np.uint64(29)
_HALF = np.uint64(32)
_WORDS = 1 << 15
_SIEVED = 1024
"""Bytes of a word that its key is made of: each pass takes eight, and a name may have millions."""
_MASKS = np.array([0] + [(1 << 8 * i) - 1 for i in range(1, 9)], dtype=np.uint64)


@dataclass(frozen=True, slots=True)
class Interned:
    """The names of a text, without repeats, in order of their first words.

    `ids` int32[words]: the number of each word's name. `start`, `stop` int32[names]: where the first word of
    that name stands. `groups` finds a name by its key; `spill` holds names whose key another one has.
    """

    data: bytes
    ids: NDArray[np.int32]
    start: NDArray[np.int32]
    stop: NDArray[np.int32]
    groups: Groups
    spill: dict[bytes, int]

    def __len__(self) -> int:
        return len(self.start)

    def text(self, name: int) -> str:
        """Return the name with a number."""
        return self.data[self.start[name] : self.stop[name]].decode("latin-1")

    def find(self, text: str) -> int:
        """Return the number of a name, or -1 when the text does not have it."""
        return int(self.find_all((text,))[0])

    def find_all(self, texts: Sequence[str]) -> NDArray[np.int32]:
        """Return the numbers of names, int32[texts], -1 for those that the text does not have."""
        found = np.full(len(texts), -1, np.int32)
        if not len(self) or not texts:
            return found
        words = [text.encode("utf-8", "surrogateescape") for text in texts]
        stop = np.cumsum([len(word) for word in words])
        start = np.concatenate(([0], stop[:-1]))
        near = self.groups.find(_keys(b"".join(words) + bytes(PAD), start, stop))
        for at in np.flatnonzero(near >= 0).tolist():
            name = int(near[at])
            if self.data[self.start[name] : self.stop[name]] == words[at]:
                found[at] = name
        for number, word in enumerate(words if self.spill else ()):
            found[number] = self.spill.get(word, int(found[number]))
        return found


class Groups(NamedTuple):
    """Equal keys put together.

    `ids` int32[keys]: the number of each key's group, in order of first keys; `heads` int64[groups]: the
    first key of each. To find a key again: `table` int32 maps its highest bits to the first key that has
    them, plus 1; the keys that had to give way to another are in `others`, ascending, with their groups in
    `other_ids`.
    """

    keys: NDArray[np.uint64]
    ids: NDArray[np.int32]
    heads: NDArray[np.int64]
    table: NDArray[np.int32]
    others: NDArray[np.uint64]
    other_ids: NDArray[np.int32]

    def find(self, keys: NDArray[np.uint64]) -> NDArray[np.int32]:
        """Return the groups of keys, -1 where there is none."""
        found = np.full(len(keys), -1, np.int32)
        owner = self.table[_slots(keys, self.table)] - 1
        there = np.flatnonzero(owner >= 0)
        there = there[self.keys[owner[there]] == keys[there]]
        found[there] = self.ids[owner[there]]
        if len(self.others):
            near = np.minimum(np.searchsorted(self.others, keys), len(self.others) - 1)
            there = np.flatnonzero(self.others[near] == keys)
            found[there] = self.other_ids[near[there]]
        return found


def _slots(keys: NDArray[np.uint64], table: NDArray[np.int32]) -> NDArray[np.int64]:
    """Return the place of each key in a table of 2**n entries: its n highest bits."""
    slots: NDArray[np.int64] = (keys >> np.uint64(65 - len(table).bit_length())).astype(np.int64)
    return slots


def _group(keys: NDArray[np.uint64]) -> Groups:
    """Put equal keys together: in a table by their highest bits, and by sorting where two keys share those.

    Several times faster than to sort all, and names keep the order of the text, which keeps what belongs to
    neighbours together in memory.
    """
    count = len(keys)
    table = np.zeros(1 << max(4, count.bit_length() + 1), np.int32)
    slots = _slots(keys, table)
    table[slots[::-1]] = np.arange(count, 0, -1, dtype=np.int32)  # the last that is written stays: the first
    owner = table[slots] - np.int32(1)
    lost = np.flatnonzero(keys[owner] != keys)
    others, first, back = np.unique(keys[lost], return_index=True, return_inverse=True)
    owner[lost] = lost[first][back]
    is_head = owner == np.arange(count, dtype=np.int32)
    numbers = np.cumsum(is_head, dtype=np.int32)
    numbers -= 1
    return Groups(keys, numbers[owner], np.flatnonzero(is_head), table, others, numbers[lost[first]])


def _keys(data: bytes, start: NDArray[np.integer], stop: NDArray[np.integer]) -> NDArray[np.uint64]:
    """Return a 64-bit key of each word, made of the word's 8-byte pieces; `data` is padded.

    Up to 8 bytes the key is the word itself, mixed by bijections. Longer words have the highest bit set
    before the mixing; shorter ones, being ASCII, have not.
    """
    keys = np.empty(len(start), np.uint64)
    for first in range(0, len(start), _WORDS):  # so many stay in the processor's cache
        these = slice(first, first + _WORDS)
        keys[these] = _keys_of_some(data, start[these], stop[these] - start[these])
    return keys


def _keys_of_some(data: bytes, start: NDArray[np.integer], length: NDArray[np.integer]) -> NDArray[np.uint64]:
    pieces = np.ndarray((len(data) - 7,), dtype="<u8", buffer=data, strides=(1,))
    length = np.minimum(length, _SIEVED)
    keys: NDArray[np.uint64] = pieces[start] & _MASKS[np.minimum(length, 8)]
    rest = long = np.flatnonzero(length > 8)
    offset = 8
    with np.errstate(over="ignore"):
        while rest.size:
            piece = pieces[start[rest] + offset] & _MASKS[np.minimum(length[rest] - offset, 8)]
            keys[rest] = (keys[rest] * _MULTIPLIER + (keys[rest] >> _SHIFT)) ^ piece
            offset += 8
            rest = rest[length[rest] > offset]
        keys[long] |= _LONG
        keys *= _MULTIPLIER
        keys ^= keys >> _HALF
        keys *= _FINISHER
    return keys


PAD = 16
"""Bytes that must follow the words in what `intern` gets, so that pieces can be read past the last one."""


def intern(data: bytes, start: NDArray[np.int32], stop: NDArray[np.int32]) -> Interned:
    """Number the words `data[start:stop]`; `data` ends with PAD bytes beyond them.

    Words are put together by a 64-bit key; then every word is compared with the first of its key, byte for
    byte, and the words of which that fails (none, but for an attack) get numbers of their own.
    """
    groups = _group(_keys(data, start, stop))
    ids = groups.ids
    name_start, name_stop = start[groups.heads], stop[groups.heads]
    odd = _differing(data, start, stop, name_start, name_stop, ids)
    spill: dict[bytes, int] = {}
    for word in odd:
        text = data[start[word] : stop[word]]
        if text not in spill:
            spill[text] = len(name_start)
            name_start = np.append(name_start, start[word])
            name_stop = np.append(name_stop, stop[word])
        ids[word] = spill[text]
    return Interned(data, ids, name_start, name_stop, groups, spill)


def _differing(
    data: bytes,
    start: NDArray[np.int32],
    stop: NDArray[np.int32],
    name_start: NDArray[np.int32],
    name_stop: NDArray[np.int32],
    ids: NDArray[np.int32],
) -> NDArray[np.int64]:
    """Return the numbers of the words that differ from the first word of their key.

    Only words longer than 8 bytes can (see `_keys`).
    """
    pieces = np.ndarray((len(data) - 7,), dtype="<u8", buffer=data, strides=(1,))
    words = np.flatnonzero(stop - start > 8)
    one, other = start[words], name_start[ids[words]]
    length = stop[words] - one
    differs = length != name_stop[ids[words]] - other
    differs |= pieces[one] != pieces[other]
    for word in np.flatnonzero(length > _SIEVED):
        size = int(length[word])
        differs[word] |= data[one[word] : one[word] + size] != data[other[word] : other[word] + size]
    length = np.minimum(length, _SIEVED)
    rest = np.arange(len(words))
    offset = 8
    while rest.size:
        mask = _MASKS[np.minimum(length[rest] - offset, 8)]
        differs[rest] |= ((pieces[one[rest] + offset] ^ pieces[other[rest] + offset]) & mask) != 0
        offset += 8
        rest = rest[length[rest] > offset]
    found: NDArray[np.int64] = words[differs]
    return found
