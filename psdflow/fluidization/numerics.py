"""What every formula of this package shares: arrays of floats, grains that float, a root in log space."""

from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike, NDArray

MAX_STEPS = 60
RESIDUAL = 3e-13  # in ln units, so a relative error; a few hundred roundings of a float


def floats(value: ArrayLike) -> NDArray[np.float64]:
    """``value`` as an array of floats."""
    return np.asarray(value, float)


def sinking(particle_density: ArrayLike, fluid_density: ArrayLike) -> NDArray[np.float64]:
    """Particle density (kg/m³), ``nan`` where the grain is lighter than the fluid and would float."""
    rho_p, rho_f = floats(particle_density), floats(fluid_density)
    return np.where(rho_p >= rho_f, rho_p, np.nan)


def solve_log(
    residual: Callable[[NDArray[np.float64]], NDArray[np.float64]], start: NDArray[np.float64]
) -> NDArray[np.float64]:
    """Solve ``residual(y) = 0`` for every element, where y and the residual are logarithms.

    Power-law-like curves are almost straight lines in logarithms: secant steps converge in five or six
    rounds from any sane start. The slope, which must rise with y, is held between 0.5 and 3.

    Parameters
    ----------
    residual
        Rising function of ``y``, slope between about 0.8 and 2.5, evaluated on whole arrays.
    start
        First guess of ``y``, already of the full shape. ``nan`` elements stay ``nan``.

    Raises
    ------
    ArithmeticError
        If an element has not converged, which means the curve is not of that kind.
    """
    y, slope = start, np.full_like(start, 1.5)
    value = residual(y)
    for _ in range(MAX_STEPS):
        if not np.any(np.abs(value) > RESIDUAL):
            return y
        step = -value / slope
        y = y + step
        previous, value = value, residual(y)
        far = np.abs(step) > 1e-7  # nearer than that the difference is rounding: keep the old slope
        measured = (value - previous) / np.where(far, step, 1.0)
        slope = np.where(far, np.clip(measured, 0.5, 3.0), slope)
    raise ArithmeticError("the force balance did not converge; a drag law or size is far outside its range")
