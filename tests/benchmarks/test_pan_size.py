"""Which tail serves the pan: the straightest of three lines (in use), one log-normal line, or the best nonlinear fit?

Curves whose true d32 is known are sieved, the pan closed by each rule inside the same bounds, and d32 compared with that of
the true tail. Known curves: exact log-normals and RRSB, and those of 60 laser curves of river sediment (CC0, see
tests/reports/open) that leave at most a quarter in the pan. "disturbed": each sieve off by 2 % (s.d.), each share by 0.2 %.

pytest tests/benchmarks/test_pan_size.py -s
"""

import time
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest

from psdflow.distribution import SizeDistribution
from psdflow.reports import read
from psdflow.sizes import statistics as st
from psdflow.sizes.fits import fit_models, log_normal, rrsb
from psdflow.sizes.open_ends import PAN_MEAN_SIZE, _lognormal_tail, ratio_for_mean_size, tail_mean_size

OPEN = Path(__file__).parents[1] / "reports" / "open"
COARSE = np.array([45, 63, 90, 125, 180, 250, 355, 500, 710, 1000]) * 1e-6
CLOSE = np.array([20, 25, 32, 38, 45, 53, 63, 75, 90, 106, 125, 150, 180, 212, 250, 300]) * 1e-6


def d32_with(mean: float, sieves: np.ndarray, q: np.ndarray) -> float:
    """d32 with a pan of surface-mean size ``mean`` x its sieve."""
    edges = np.concatenate([[sieves[0] / ratio_for_mean_size(mean)], sieves, [sieves[-1] * 2**0.5]])
    return float(st.d32(SizeDistribution.of(edges, np.diff([0, *q, 1]))))


def best_fit(sieves: np.ndarray, q: np.ndarray) -> float:
    """From the best of the models fitted by nonlinear least squares."""
    fit = fit_models(sieves, q, 1 / np.maximum(q * (1 - q), 0.01))[0]
    return fit.mean_size_below(float(sieves[0])) / float(sieves[0])


def log_normal_line(sieves: np.ndarray, q: np.ndarray) -> float:
    """From a log-normal line through the three finest sieves."""
    from scipy.special import ndtri

    slope, start = np.polyfit(np.log(sieves[:3] / sieves[0]), ndtri(q[:3]), 1)
    return float(_lognormal_tail(start, slope))


RULES: dict[str, Callable[[np.ndarray, np.ndarray], float]] = {
    "straightest of three lines": lambda sieves, q: float(tail_mean_size(sieves, q)),
    "best nonlinear fit": best_fit,
    "log-normal line, 3 finest": log_normal_line,
    "half the finest sieve": lambda sieves, q: 0.5,  # noqa: ARG005
}


def truths() -> dict[str, list[SizeDistribution]]:
    fine = np.geomspace(0.01, 5000, 6001) * 1e-6
    exact = {
        "log-normal": [(log_normal, m * 1e-6, s) for m in (70, 100, 150) for s in (1.4, 1.5, 1.8, 2.2)],
        "RRSB": [(rrsb, m * 1e-6, n) for m in (80, 120, 180) for n in (1.5, 2.0, 3.0, 4.0)],
    }
    found = {
        name: [SizeDistribution.of(fine, np.diff(f(fine, size, shape))) for f, size, shape in some]
        for name, some in exact.items()
    }
    return found | {"sediment": [r.distribution for r in read(OPEN / "sediment_laser_classes_cc0.csv")]}


def cuts(truth: SizeDistribution) -> list[tuple[np.ndarray, np.ndarray]]:
    """Stacks of sieves under which at most a quarter lies, and the share finer than each sieve."""
    found = []
    for series in (COARSE, CLOSE):
        for first in range(3):
            sieves = series[first:]
            q = truth.undersize(sieves)
            kept = (q > 0.005) & (q < 0.9999)
            if kept.sum() >= 3 and q[kept][0] <= 0.25:
                found.append((sieves[kept], q[kept]))
    return found


def true_mean(truth: SizeDistribution, size: float) -> float:
    """Surface-mean size of what truly lies below ``size``, over it."""
    edges = np.append(truth.edges[truth.edges < size], size)
    return float(st.d32(SizeDistribution.of(edges, np.diff(truth.undersize(edges))))) / size


def disturbed(sieves: np.ndarray, q: np.ndarray, random: np.random.Generator) -> tuple[np.ndarray, np.ndarray]:
    shares = np.diff([0, *q, 1])
    shares = np.maximum(shares + 0.002 * random.standard_normal(shares.size), 0.3 * shares)
    return sieves * np.exp(0.02 * random.standard_normal(sieves.size)), np.cumsum(shares / shares.sum())[:-1]


@pytest.mark.parametrize("noisy", [False, True], ids=["exact", "disturbed"])
def test_the_straightest_line_serves_as_well_as_the_best_fit(noisy: bool) -> None:
    random = np.random.default_rng(1)
    print(f"\n{'disturbed' if noisy else 'exact'}: |error| of d32{'median':>33}{'9 of 10 under':>16}")
    for name, some in truths().items():
        errors: dict[str, list[float]] = {rule: [] for rule in RULES}
        for truth in some:
            for sieves, q in cuts(truth):
                mean = np.clip(true_mean(truth, float(sieves[0])), 0.06, 0.98)
                seen = disturbed(sieves, q, random) if noisy else (sieves, q)
                for rule, tail in RULES.items():
                    value = d32_with(np.clip(np.nan_to_num(tail(*seen), nan=0.5), *PAN_MEAN_SIZE), *seen)
                    errors[rule].append(abs(value / d32_with(float(mean), *seen) - 1))
        for rule, found in errors.items():
            print(f"  {name:12}{rule:28}{np.median(found):12.1%}{np.quantile(found, 0.9):15.1%}  ({len(found)} stacks)")
        ours, fitted = (np.median(errors[rule]) for rule in list(RULES)[:2])
        assert ours <= max(0.01, fitted * 1.2), name


def test_what_each_costs() -> None:
    sieves, q = cuts(truths()["RRSB"][0])[0]
    start = time.perf_counter()
    for _ in range(20):
        best_fit(sieves, q)
    fitted = (time.perf_counter() - start) / 20
    many = np.tile(sieves, (1000, 1)), np.tile(q, (1000, 1))
    start = time.perf_counter()
    tail_mean_size(*many)
    lines = time.perf_counter() - start
    print(f"\nnonlinear fits, one lot: {fitted * 1e3:.1f} ms; lines, 1000 lots: {lines * 1e3:.1f} ms")
    assert lines < 1000 * fitted / 20
