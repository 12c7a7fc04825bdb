"""Published two-parameter distributions fitted to a cumulative curve.

Each model is one undersize function of size and two parameters; `fit_models` fits all of them by weighted nonlinear least
squares and puts the best first. One lot at a time: scipy.optimize is imported inside.
"""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.distribution import SizeDistribution
from psdflow.errors import InputError

Array = NDArray[np.float64]
Undersize = Callable[[ArrayLike, float, float], Array]


def rrsb(size: ArrayLike, location: float, exponent: float) -> Array:
    """``1 - exp(-(x/x')^n)``. Source: Rosin & Rammler 1933, Sperling, Bennett; DIN 66145 (form looked up)."""
    return np.asarray(-np.expm1(-((np.asarray(size, float) / location) ** exponent)))


def log_normal(size: ArrayLike, median: float, geometric_sd: float) -> Array:
    """``Φ(ln(x/x50) / ln σ_g)``. Source: Hatch & Choate 1929; ISO 9276-5."""
    from scipy.special import ndtr

    return np.asarray(ndtr(np.log(np.asarray(size, float) / median) / np.log(geometric_sd)))


def ggs(size: ArrayLike, largest: float, exponent: float) -> Array:
    """``(x/k)^m`` up to k. Source: Gates 1915, Gaudin 1926, Schuhmann 1940 (from memory)."""
    return np.asarray(np.minimum(np.asarray(size, float) / largest, 1.0) ** exponent)


@dataclass(frozen=True)
class Model:
    """A distribution: undersize function and the names of its size and shape parameters."""

    name: str
    undersize: Undersize
    size_name: str
    shape_name: str


MODELS: dict[str, Model] = {
    "rrsb": Model("Rosin–Rammler–Sperling–Bennett", rrsb, "x'", "n"),
    "log-normal": Model("log-normal", log_normal, "x50", "σ_g"),
    "ggs": Model("Gates–Gaudin–Schuhmann", ggs, "k", "m"),
}


@dataclass(frozen=True)
class Fit:
    """One fitted model. ``size`` in m; ``error`` is what the fit made least: the weighted rms deviation of Q.

    ``max_error`` is the largest deviation of the undersize share, ``r_squared`` its explained variance, unweighted.
    """

    key: str
    size: float
    shape: float
    error: float
    max_error: float
    r_squared: float

    @property
    def model(self) -> Model:
        """The model that was fitted."""
        return MODELS[self.key]

    def undersize(self, size: ArrayLike) -> Array:
        """Share finer than ``size`` (m)."""
        return self.model.undersize(size, self.size, self.shape)

    def mean_size_below(self, size: float) -> float:
        """Surface-mean size (m) of what the model holds below ``size``: ``Q(a) / ∫ q/x dx`` up to a; may be 0.

        RRSB: ``∫ = γ(1 - 1/n, (a/x')^n) / x'``, infinite for n <= 1; log-normal as in `open_ends.tail_mean_size`;
        GGS: ``a (m - 1) / m``, 0 for m <= 1.
        """
        from scipy.special import gamma, gammainc, log_ndtr

        share = float(self.undersize(size))
        if self.key == "log-normal":
            s, log_ratio = np.log(self.shape), np.log(size / self.size)
            return float(self.size * np.exp(-(s**2) / 2 + log_ndtr(log_ratio / s) - log_ndtr(log_ratio / s + s)))
        if self.shape <= 1 or share <= 0:
            return 0.0
        if self.key == "ggs":
            return min(size, self.size) * (self.shape - 1) / self.shape
        order = 1 - 1 / self.shape
        return float(share * self.size / (gamma(order) * gammainc(order, (size / self.size) ** self.shape)))


def fit_models(sizes: ArrayLike, undersize: ArrayLike, weights: ArrayLike | None = None) -> list[Fit]:
    """All models fitted to points of a cumulative curve, the best first.

    Parameters
    ----------
    sizes, undersize : (points,)
        Sizes in m and the share finer than each; points at 0 and 1 count too.
    weights : (points,), optional
        Inverse variances of the shares, in any unit; equal if not given.

    Raises
    ------
    InputError
        If fewer than two points lie inside the curve.
    """
    from scipy.optimize import least_squares

    x, q = np.asarray(sizes, float), np.asarray(undersize, float)
    inside = (q > 1e-6) & (q < 1 - 1e-6)
    if inside.sum() < 2:
        raise InputError("a model can be fitted only to two or more points of the cumulative curve between 0 and 100 %")
    root = np.sqrt(np.ones_like(q) if weights is None else np.asarray(weights, float))
    root = root / np.sqrt((root**2).sum())
    fits = []
    for key, start in _starts(np.log(x[inside]), q[inside]).items():
        function = MODELS[key].undersize
        unit = np.exp(start[0])  # sizes near 1 keep the steps of both parameters alike

        def off(p: Array, function: Undersize = function, unit: float = unit) -> Array:
            shape = np.exp(p[1]) if function is not log_normal else np.exp(np.exp(p[1]))
            return root * (function(x / unit, float(np.exp(p[0])), float(shape)) - q)

        with np.errstate(over="ignore", under="ignore"):
            found = least_squares(off, [0.0, start[1]], bounds=([-7, -4], [7, 4]), xtol=1e-12, ftol=1e-12, gtol=1e-12)
            shape = np.exp(found.x[1]) if key != "log-normal" else np.exp(np.exp(found.x[1]))
            size = float(unit * np.exp(found.x[0]))
            miss = MODELS[key].undersize(x, size, float(shape)) - q
        spread = float(((q - q.mean()) ** 2).sum())
        fits.append(Fit(key, size, float(shape), float(np.sqrt(2 * found.cost)), float(np.abs(miss).max()),
                        1 - float((miss**2).sum()) / spread if spread else float("nan")))  # fmt: skip
    return sorted(fits, key=lambda fit: fit.error)


def _starts(log_size: Array, q: Array) -> dict[str, tuple[float, float]]:
    """First guesses (ln size, ln shape) from the straight line of each model."""
    from scipy.special import ndtri

    guesses = {}
    for key, straight, level in (
        ("rrsb", np.log(-np.log1p(-q)), 0.0),
        ("log-normal", ndtri(q), 0.0),
        ("ggs", np.log(q), 0.0),
    ):
        slope, offset = np.polyfit(log_size, straight, 1)
        slope = min(max(slope, 0.05), 20.0)
        guesses[key] = (float((level - offset) / slope), float(np.log(slope) * (-1 if key == "log-normal" else 1)))
    return guesses


def fit_distribution(distribution: SizeDistribution) -> list[Fit]:
    """All models fitted to one lot at its measured edges, the best first.

    Weights are those of a counted share, ``1 / (Q (1 - Q))``, held where less than 1 % lies outside: so the tails
    count, and no single per mille rules. Assumed outer edges of open ends are left out.
    """
    q, x = distribution.cumulative, distribution.edges
    kept = slice(1 if distribution.lower_open else 0, -1 if distribution.upper_open else None)
    q, x = q[kept], x[kept]
    return fit_models(x, q, 1 / np.maximum(q * (1 - q), 0.01))
