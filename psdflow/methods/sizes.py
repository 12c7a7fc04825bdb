"""Methods of psdflow.sizes."""

from psdflow.methods import Method

METHODS: tuple[Method, ...] = ()
