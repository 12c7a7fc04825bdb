"""What the YAML documents (material, duty, limits) share: loading, quantities with units, messages."""

import difflib
from contextvars import ContextVar
from pathlib import Path
from typing import Annotated, Any, Self, cast

from pydantic import BaseModel, BeforeValidator, ConfigDict, ValidationError

from psdflow.errors import InputError, shown
from psdflow.units import Measured, read_quantity

# Set while a file is loaded: there every quantity carries its unit; from Python a bare number is SI.
_from_file: ContextVar[bool] = ContextVar("_from_file", default=False)


def _reader(dimension: str) -> BeforeValidator:
    """Validator of one quantity: text with its unit; from Python also a number in SI units."""

    def read(value: object) -> Measured:
        if isinstance(value, Measured):
            return value
        if isinstance(value, (int, float)) and not isinstance(value, bool) and not _from_file.get():
            return Measured(float(value))
        return read_quantity(value, dimension)

    return BeforeValidator(read)


Length = Annotated[Measured, _reader("length")]
Velocity = Annotated[Measured, _reader("velocity")]
Density = Annotated[Measured, _reader("density")]
Viscosity = Annotated[Measured, _reader("viscosity")]
Temperature = Annotated[Measured, _reader("temperature")]
Pressure = Annotated[Measured, _reader("pressure")]
MassRate = Annotated[Measured, _reader("mass rate")]
Time = Annotated[Measured, _reader("time")]
Rate = Annotated[Measured, _reader("rate")]
Angle = Annotated[Measured, _reader("angle")]
Energy = Annotated[Measured, _reader("energy")]
Fraction = Annotated[Measured, _reader("fraction")]
Number = Annotated[Measured, _reader("number")]


def require(condition: bool, key: str, found: object, expected: str) -> None:
    """Raise the one-line message of an impossible property unless ``condition`` holds."""
    if not condition:
        raise InputError(f"{key}: found {found}; expected {expected}")


class Document(BaseModel):
    """Base of the documents: unknown keys refused, immutable, loaded from YAML with `load`."""

    model_config = ConfigDict(extra="forbid", frozen=True, arbitrary_types_allowed=True)

    def __init__(self, **data: Any) -> None:
        try:
            super().__init__(**data)
        except ValidationError as error:
            raise InputError(_first_message(error, type(self))) from None

    @classmethod
    def load(cls, path: str | Path) -> Self:
        """Read the document from a YAML file, every quantity with its unit.

        Raises
        ------
        InputError
            The file can't be read, isn't YAML, misses a key, has an unknown one, or a quantity is wrong;
            the message names file and key.
        """
        name = Path(path).name
        data = _read_yaml(Path(path))
        token = _from_file.set(True)
        try:
            return cls(**data)
        except InputError as error:
            raise InputError(f"{name}: {error}") from None
        finally:
            _from_file.reset(token)


def _read_yaml(path: Path) -> dict[str, Any]:
    import yaml

    class UniqueKeys(yaml.SafeLoader):
        """Safe loader that refuses a key written twice and any alias."""

        def compose_node(self, parent: Any, index: Any) -> Any:
            if self.check_event(yaml.AliasEvent):
                raise InputError(f"{path.name}: YAML aliases (*name) aren't used here; write the value out")
            return super().compose_node(parent, index)

        def construct_mapping(self, node: Any, deep: bool = False) -> dict[Any, Any]:
            keys = [key.value for key, _ in node.value]
            twice = sorted({str(key) for key in keys if keys.count(key) > 1})
            if twice:
                line = node.start_mark.line + 1
                raise InputError(f"{path.name}: key {shown(twice[0])} stands twice in the block at line {line}")
            return cast(dict[Any, Any], super().construct_mapping(node, deep))

    try:
        if path.stat().st_size > 1_000_000:
            raise InputError(f"{path.name}: larger than 1 MB, that is no {path.suffix or 'YAML'} document of this kind")
        text = path.read_text(encoding="utf-8-sig")
        data = yaml.load(text, UniqueKeys)
    except OSError as error:
        raise InputError(f"{path}: can't be read ({error.strerror or error})") from None
    except UnicodeDecodeError:
        raise InputError(f"{path.name}: not UTF-8 text; save it as UTF-8") from None
    except yaml.YAMLError as error:
        mark = getattr(error, "problem_mark", None)
        where = f", line {mark.line + 1}" if mark else ""
        problem = getattr(error, "problem", None) or "not YAML"
        raise InputError(f"{path.name}{where}: {problem}; expected lines like `key: value unit`") from None
    except (RecursionError, ValueError) as error:
        if isinstance(error, InputError):
            raise
        raise InputError(f"{path.name}: not a YAML document of keys and values") from None
    if not isinstance(data, dict):
        raise InputError(f"{path.name}: found {shown(data)}; expected keys and values, one a line")
    return {str(key): value for key, value in data.items()}


def _first_message(error: ValidationError, model: type[BaseModel]) -> str:
    """The first problem as one line: key, what was found, what was expected."""
    problem = error.errors()[0]
    key = ".".join(str(part) for part in problem["loc"])
    if problem["type"] == "missing":
        return f"{key}: missing; this key is required"
    if problem["type"] == "extra_forbidden":
        known = _known_keys(model, problem["loc"][:-1])
        close = difflib.get_close_matches(str(problem["loc"][-1]), known, 1)
        hint = f"did you mean {close[0]}?" if close else f"known keys are {', '.join(known)}"
        return f"{key}: unknown key; {hint}"
    if problem["type"] == "value_error":
        message = str(problem["ctx"]["error"])
        return f"{key}: {message}" if key and not message.startswith(key) else message
    if problem["type"] == "model_type":
        return f"{key}: found {shown(problem['input'])}; expected a block of keys and values"
    return f"{key}: found {shown(problem['input'])}; {problem['msg'].lower()}"


def _known_keys(model: type[BaseModel], location: tuple[int | str, ...]) -> list[str]:
    """Keys allowed at ``location`` inside ``model``."""
    fields = model.model_fields
    for part in location:
        if isinstance(part, int) or part not in fields:
            continue
        inner = fields[part].annotation
        candidates = [inner, *getattr(inner, "__args__", ())]
        nested = [c for c in candidates if isinstance(c, type) and issubclass(c, BaseModel)]
        if nested:
            fields = nested[0].model_fields
    return list(fields)
