"""Reports written as a canonical csv read back to the same numbers, exactly."""

from pathlib import Path
from tempfile import TemporaryDirectory

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from psdflow.errors import InputError
from psdflow.reports import Report, canonical_text, read

FILES = Path(__file__).parent / "files"


def _same(one: Report, other: Report) -> None:
    assert np.array_equal(one.edges, other.edges)
    assert np.array_equal(one.shares, other.shares)
    assert (one.below, one.above) == (other.below, other.above)
    assert (one.repeats is None) == (other.repeats is None)
    if one.repeats is not None and other.repeats is not None:
        assert np.array_equal(one.repeats, other.repeats)
    for key in ("source", "sha256", "sheet", "sample", "lot", "kind", "quantity", "fields", "understood", "warnings",
                "sample_mass", "loss", "sieved_from", "reconstructed"):  # fmt: skip
        assert getattr(one, key) == getattr(other, key), key


def test_every_report_survives_exactly(tmp_path: Path) -> None:
    for file in sorted(FILES.iterdir()):
        reports = read(file)
        (tmp_path / "canonical.csv").write_text(canonical_text(reports), encoding="utf-8")
        back = read(tmp_path / "canonical.csv")
        assert len(back) == len(reports)
        for one, other in zip(reports, back, strict=True):
            _same(one, other)


words = st.text(st.characters(blacklist_categories=("Cs", "Cc", "Zl", "Zp", "Zs")), min_size=1, max_size=12)


@st.composite
def reports(draw: st.DrawFn) -> Report:
    n = draw(st.integers(1, 12))
    steps = draw(st.lists(st.floats(1.01, 3.0), min_size=n + 1, max_size=n + 1))
    weights = np.array(draw(st.lists(st.floats(0.001, 100), min_size=n + 2, max_size=n + 2)))
    weights = weights / weights.sum()
    repeats = None
    if draw(st.booleans()):
        repeats = np.array([weights, weights[::-1]])
        weights = repeats.mean(axis=0)
    return Report(
        source=draw(words),
        sha256=draw(st.text("0123456789abcdef", min_size=64, max_size=64)),
        sheet=draw(st.none() | words),
        sample=draw(words),
        lot=draw(words),
        kind=draw(st.sampled_from(["sieve", "laser"])),
        quantity=draw(st.sampled_from(["mass", "volume", "number", "area"])),
        edges=1e-7 * np.cumprod(steps),
        shares=weights[1:-1],
        below=float(weights[0]),
        above=float(weights[-1]),
        fields=draw(st.dictionaries(words, words, max_size=3)),
        understood=draw(st.dictionaries(words, words, max_size=3)),
        warnings=tuple(draw(st.lists(words, max_size=3))),
        repeats=repeats,
        sample_mass=draw(st.none() | st.floats(1e-6, 100)),
        loss=draw(st.none() | st.floats(-0.02, 0.02)),
        sieved_from=draw(st.none() | st.floats(1e-6, 1e-3)),
        reconstructed=draw(st.booleans()),
    )


@settings(max_examples=80, deadline=None)
@given(st.lists(reports(), min_size=1, max_size=3))
def test_any_report_survives_exactly(written: list[Report]) -> None:
    with TemporaryDirectory() as folder:
        file = Path(folder) / "canonical.csv"
        file.write_text(canonical_text(written), encoding="utf-8")
        back = read(file)
    assert len(back) == len(written)
    for one, other in zip(written, back, strict=True):
        _same(one, other)


@pytest.mark.parametrize(
    ("old", "new", "part"),
    [
        ("0.07", "0.09", "add up to"),
        ("kind,sieve", "kind,guess", "is unknown"),
        ("sha256", "hash", "a line of the canonical table"),
        ("6.3e-05", "6.3e-04", "each class join"),
        ("below", "below", ""),
        ("lower [m]", "lower", "a line of the canonical table"),
        ("0.07", "-0.07", "two sizes in m and fractions"),
    ],
)
def test_a_changed_canonical_table_is_refused(old: str, new: str, part: str, tmp_path: Path) -> None:
    text = canonical_text(read(FILES / "sieve_mass_um.csv"))
    changed = text.replace(old, new, 1)
    (tmp_path / "canonical.csv").write_text(changed, encoding="utf-8")
    if changed == text:
        assert len(read(tmp_path / "canonical.csv")) == 1
        return
    with pytest.raises(InputError, match=part):
        read(tmp_path / "canonical.csv")
