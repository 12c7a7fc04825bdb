"""Methods of psdflow.fluidization."""

from psdflow.methods import Method

METHODS: tuple[Method, ...] = ()
