"""The catalogue of methods as a page."""

from rich.console import Group, RenderableType
from rich.padding import Padding
from rich.text import Text

from psdflow.errors import InputError
from psdflow.methods import Method, catalogue
from psdflow.methods.rules import RULES
from psdflow.present.numerals import digits


def catalogue_page(quantity: str | None = None) -> RenderableType:
    """Every method, or those of one sheet key.

    Raises
    ------
    InputError
        No method gives ``quantity``; the message lists what there is.
    """
    entries = [entry for entry in catalogue().values() if quantity in (None, entry.quantity)]
    if not entries:
        known = ", ".join(dict.fromkeys(entry.quantity for entry in catalogue().values()))
        raise InputError(f'no method gives "{quantity}"; quantities with methods are {known}')
    quantities = dict.fromkeys(entry.quantity for entry in entries)
    rules = [Text.assemble((f"{key}, recommended: ", "bold"), RULES[key]) for key in quantities if key in RULES]
    return Group(*rules, Text(""), *(_entry(entry) for entry in entries))


def _entry(entry: Method) -> RenderableType:
    lines: list[Text] = [
        Text.assemble((entry.name, "bold"), f"  {entry.quantity}  ", (entry.key, "dim")),
        Text(entry.source),
    ]
    if entry.ranges:
        lines.append(Text("range: " + "; ".join(_range(name, *ends) for name, ends in entry.ranges.items())))
    else:
        lines.append(Text("range: none stated that could be found"))
    size = {"sv": "surface-volume diameter; ", "v": "volume-equivalent diameter; "}.get(entry.diameter, "")
    scatter = f"scatter {entry.scatter:.0%} (one s.d.); " if entry.scatter else ""
    lines.append(Text(f"{size}{scatter}coefficients {entry.checked}"))
    if entry.note:
        lines.append(Text(entry.note, style="italic"))
    body: list[RenderableType] = [lines[0], *(Padding(line, (0, 0, 0, 2)) for line in lines[1:])]
    return Padding(Group(*body), (0, 0, 1, 0))


def _range(name: str, low: float, high: float) -> str:
    shown = name.replace("_", " ")
    if name == "diameter":
        return f"{shown} {digits(low * 1e6)} to {digits(high * 1e6)} µm"
    return f"{shown} {digits(low)} to {digits(high)}"
