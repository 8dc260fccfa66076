"""Numbers for names: exact, whatever the keys do."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, strategies as st

from tardigate.syntax import intern as module
from tardigate.syntax.intern import PAD, Interned, intern


def _intern(words: list[bytes]) -> Interned:
    stop = np.cumsum([len(word) for word in words], dtype=np.int32)
    padded = b"".join(words) + bytes(PAD)
    return intern(padded, np.concatenate(([0], stop[:-1])).astype(np.int32), stop.astype(np.int32))


words = st.lists(
    st.binary(min_size=1, max_size=40).filter(lambda word: 0 not in word), min_size=1, max_size=60
)


def _holds(names: list[bytes]) -> None:
    found = _intern(names)
    for name, number in zip(names, found.ids.tolist(), strict=True):
        assert found.text(number).encode("latin-1") == name
    assert len(found) == len(set(names))


@given(words)
def test_each_name_has_its_own_number(names: list[bytes]) -> None:
    _holds(names)


@given(words)
def test_names_with_one_key_are_told_apart(names: list[bytes]) -> None:
    """Keys are a sieve only: with keys that say nothing but the first 8 bytes the numbers are exact still."""
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(module, "_keys", _first_bytes)
        _holds([b"same_start_" + name for name in names])


def _first_bytes(data: bytes, start: np.ndarray, stop: np.ndarray) -> np.ndarray:
    cut = [data[a:b][:8].ljust(8, b"\0") for a, b in zip(start.tolist(), stop.tolist(), strict=True)]
    return np.frombuffer(b"".join(cut), "<u8").astype(np.uint64)


def test_many_names_are_sorted_the_quick_way_and_mean_the_same() -> None:
    names = [f"net_{i % 5000}_with_a_long_name".encode() for i in range(12_000)]
    found = _intern(names)
    assert len(found) == 5000
    assert [found.text(number).encode() for number in found.ids[:7000:7].tolist()] == names[:7000:7]
    assert found.find_all(["net_17_with_a_long_name", "net_17", ""]).tolist() == [int(found.ids[17]), -1, -1]
