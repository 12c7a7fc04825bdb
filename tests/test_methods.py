"""The catalogue: complete, honest about where each coefficient comes from, and ranges that work."""

import numpy as np
import pytest

from psdflow.methods import catalogue, in_range


def test_every_entry_has_a_source_and_says_how_it_was_checked():
    for entry in catalogue().values():
        assert entry.source, entry.key
        assert entry.checked in {"looked up", "from memory"}, entry.key
        assert entry.diameter in {"", "sv", "v"}, entry.key
        assert 0 <= entry.scatter < 3, entry.key
        for name, (low, high) in entry.ranges.items():
            assert low < high, (entry.key, name)


def test_in_range_broadcasts():
    inside = in_range(
        "wen-yu-1966",
        diameter=np.array([10e-6, 100e-6]),
        voidage_mf=0.45,
        sphericity=0.9,
        reynolds_mf=np.array([[1.0], [5000.0]]),
    )
    assert inside.tolist() == [[False, True], [False, False]]


def test_unknown_variable_is_not_out_of_range():
    assert in_range("wen-yu-1966", diameter=1e-4, voidage_mf=None, sphericity=None, reynolds_mf=None)


def test_a_forgotten_variable_is_an_error():
    with pytest.raises(KeyError):
        in_range("wen-yu-1966", diameter=1e-4)
