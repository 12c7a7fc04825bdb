"""A bar on the terminal while many files are read; silent where nobody watches."""

from collections.abc import Callable, Iterator
from contextlib import contextmanager


@contextmanager
def counted(what: str) -> Iterator[Callable[[int, int, str], None]]:
    """A function to call with (done, of all, name of what comes next); the bar stands on stderr and goes at the end."""
    from rich.console import Console
    from rich.progress import BarColumn, MofNCompleteColumn, Progress, TextColumn

    console = Console(stderr=True)
    columns = (TextColumn("{task.description}"), BarColumn(), MofNCompleteColumn(), TextColumn("{task.fields[name]}"))
    with Progress(*columns, console=console, transient=True, disable=not console.is_terminal) as progress:
        task = progress.add_task(what, total=None, name="")
        yield lambda done, total, name: progress.update(task, completed=done, total=total, name=name)
