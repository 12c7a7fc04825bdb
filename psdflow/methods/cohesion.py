"""Methods of psdflow.cohesion."""

from psdflow.methods import Method

METHODS: tuple[Method, ...] = ()
