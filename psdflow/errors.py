"""The one exception family."""


class InputError(ValueError):
    """Something the user gave can't be used.

    The message is one line: where (file, sheet, row or key), what was found, what was expected,
    what to do. The command line prints it and exits with code 2.
    """


def shown(value: object, width: int = 40) -> str:
    """A value as it appears in a message: quoted, one line, shortened to ``width`` characters."""
    text = " ".join(str(value).split())
    return f'"{text[: width - 1]}…"' if len(text) > width else f'"{text}"'
