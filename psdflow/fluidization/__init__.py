"""How a bed of grains answers an upward flow: groups, velocities, pressure drop, bubbles, regimes, spouting.

Each module holds one subject; formulas are pure functions on SI floats and arrays that broadcast.
The catalogue entries (source, range, scatter) are in ``psdflow.methods.fluidization``.
"""
