"""Methods of psdflow.carryover."""

from psdflow.methods import Method

METHODS: tuple[Method, ...] = ()
