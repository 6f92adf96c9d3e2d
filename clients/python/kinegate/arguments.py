"""Arguments that do not fit are refused by name, before anything is sent.

The annotations of a function say what its arguments may be, and :func:`checked` holds
every call to them:

>>> client.reaction("gamma p -> p eta", beam="1.2 Gev")
Traceback (most recent call last):
kinegate.errors.ArgumentError: beam: unknown unit 'Gev' in '1.2 Gev'; units of energy are ...
"""

from __future__ import annotations

import ast
import functools
import inspect
import operator
from collections.abc import Iterable, Mapping
from pathlib import Path
from typing import TYPE_CHECKING, Any, Final, ParamSpec, TypeVar, cast

import numpy as np

from kinegate.errors import ArgumentError, KinegateError, shortened

if TYPE_CHECKING:
    from collections.abc import Callable
    from os import PathLike

    from numpy.typing import ArrayLike, NDArray

__all__ = ["array", "checked", "integer", "text_of"]

P = ParamSpec("P")
R = TypeVar("R")
T = TypeVar("T", bound=np.generic)


def checked(function: Callable[P, R]) -> Callable[P, R]:
    """Return a function that refuses arguments beyond the function's annotations.

    Iterators of numbers and texts are read, so that a wrong one can be named.
    """
    signature = inspect.signature(function)
    name = function.__name__.lower()

    @functools.wraps(function)
    def held(*args: P.args, **kwargs: P.kwargs) -> R:
        try:
            bound = signature.bind(*args, **kwargs)
        except TypeError as error:
            raise ArgumentError(f"{error}; arguments of {name}: {_known(signature)}") from None
        given: dict[str, Any] = {}
        for key, value in bound.arguments.items():
            parameter = signature.parameters[key]
            if parameter.kind is inspect.Parameter.VAR_KEYWORD:
                members = _members(function, parameter.annotation)
                bound.arguments[key] = _fit_members(value, members)
                given |= bound.arguments[key]
            else:
                bound.arguments[key] = _fit(key, value, _parsed(parameter.annotation))
                given[key] = bound.arguments[key]
        try:
            return function(*bound.args, **bound.kwargs)
        except ArgumentError as error:
            if error.field:
                raise
            raise ArgumentError(error.message, _holder(error.value, given), error.value) from None
        except KinegateError:
            raise
        except (TypeError, ValueError, OverflowError) as error:
            # What only the message's own type can tell, such as the range of an integer.
            large = (k for k, v in given.items() if isinstance(v, int) and str(v) in str(error))
            raise ArgumentError(f"{error}", next(large, name)) from error

    return held


def array(field: str, values: ArrayLike, kind: type[T]) -> NDArray[T]:
    """Read a column of numbers.

    >>> array("phi_rad", ["east"], np.float64)
    Traceback (most recent call last):
    kinegate.errors.ArgumentError: phi_rad: ['east'] is not a column of float64: ...
    """
    try:
        raw = np.asarray(values)
        with np.errstate(invalid="ignore"):  # what is not a number is found just below
            column = np.asarray(raw, kind)
        whole = raw.dtype == kind or not np.issubdtype(kind, np.integer)
        why = (
            "" if whole or np.array_equal(raw.astype(np.float64), column) else "whole numbers only"
        )
    except (TypeError, ValueError, OverflowError) as error:
        why = str(error)
    if why:
        message = f"{shortened(values)} is not a column of {kind.__name__}: {why}"
        raise ArgumentError(message, field, values)
    return cast("NDArray[T]", column)


def integer(field: str, value: Any, lowest: int | None = None) -> int:
    """Read an integer, which may be that of numpy.

    >>> integer("events_per_block", 0, lowest=1)
    Traceback (most recent call last):
    kinegate.errors.ArgumentError: events_per_block: 0 is not above 0
    """
    if not _is_integer(value):
        raise ArgumentError(f"{shortened(value)} is not an integer", field, value)
    number = operator.index(value)
    if lowest is not None and number < lowest:
        raise ArgumentError(f"{number} is not above {lowest - 1}", field, value)
    return number


def text_of(field: str, path: str | PathLike[str]) -> str:
    """Read the text of a file.

    >>> text_of("selection", "nowhere.yaml")
    Traceback (most recent call last):
    kinegate.errors.ArgumentError: selection: cannot read 'nowhere.yaml': No such file or directory
    """
    try:
        return Path(path).read_text(encoding="utf-8")
    except OSError as error:
        raise ArgumentError(f"cannot read {str(path)!r}: {error.strerror}", field, path) from error
    except (TypeError, ValueError) as error:
        raise ArgumentError(f"cannot read {path!r}: {error}", field, path) from error


def _known(signature: inspect.Signature) -> str:
    return ", ".join(signature.parameters)


def _members(function: Callable[..., Any], annotation: str) -> Mapping[str, str]:
    """Return the annotations of the typed dictionary that keywords unpack."""
    named = annotation.removeprefix("Unpack[").removesuffix("]")
    owner = function.__globals__[named]
    return {k: getattr(v, "__forward_arg__", v) for k, v in owner.__annotations__.items()}


def _fit_members(values: Mapping[str, Any], members: Mapping[str, str]) -> dict[str, Any]:
    for name in values:
        if name not in members:
            raise ArgumentError(f"unknown argument {name!r}; known: {', '.join(members)}", name)
    return {k: _fit(k, v, _parsed(members[k])) for k, v in values.items()}


@functools.cache
def _parsed(annotation: Any) -> ast.expr:
    text = annotation if isinstance(annotation, str) else ""
    return ast.parse(text or "Any", mode="eval").body


def _is_number(value: Any) -> bool:
    if isinstance(value, (str, bytes, bool)) or getattr(value, "ndim", 0) != 0:
        return False
    try:
        float(value)
    except (TypeError, ValueError, OverflowError):
        return False
    return True


def _is_integer(value: Any) -> bool:
    try:
        operator.index(value)
    except TypeError:
        return False
    return not isinstance(value, bool)


# The plain annotations: how a value is tested, and what is allowed in words.
_PLAIN: Final[Mapping[str, tuple[Callable[[Any], bool], str]]] = {
    "float": (_is_number, "a number"),
    "int": (_is_integer, "an integer"),
    "str": (lambda v: isinstance(v, str), "a text"),
    "bool": (lambda v: isinstance(v, (bool, np.bool_)), "True or False"),
    "Quantity": (
        lambda v: isinstance(v, str) or _is_number(v),
        'a number in the base unit or a text with a unit, such as "1.2 GeV"',
    ),
    "Events": (lambda v: type(v).__name__ == "Events", "kinegate.Events"),
}
_LISTS: Final = ("Iterable", "Sequence")
_ENDLESS: Final = ("Events",)  # read as they come, and tested then


def _fit(field: str, value: Any, kind: ast.expr) -> Any:
    """Return a value that fits an annotation, with iterators read."""
    match kind:
        case ast.BinOp(op=ast.BitOr()):
            return _fit_union(field, value, _alternatives(kind))
        case ast.Subscript(value=ast.Name(id=name), slice=item) if name in _LISTS:
            return _fit_list(field, value, item)
        case ast.Subscript(value=ast.Name(id="AsyncIterable")) if not hasattr(value, "__aiter__"):
            raise ArgumentError(f"{shortened(value)} is not asynchronous", field, value)
        case ast.Subscript(value=ast.Name(id="tuple"), slice=ast.Tuple(elts=items)):
            parts = _fit_list(field, value, ast.Name(id="Any"))
            if len(parts) != len(items):
                raise ArgumentError(f"{shortened(value)} is not {len(items)} values", field, value)
            pairs = enumerate(zip(parts, items, strict=True))
            return tuple(_fit(f"{field}[{i}]", part, item) for i, (part, item) in pairs)
        case ast.Subscript(value=ast.Name(id="dict" | "Mapping"), slice=ast.Tuple(elts=[_, item])):
            if not isinstance(value, Mapping):
                raise ArgumentError(f"{shortened(value)} is not a mapping", field, value)
            return {k: _fit(f"{field}[{k!r}]", v, item) for k, v in value.items()}
        case ast.Name(id=name) if name in _PLAIN and not _PLAIN[name][0](value):
            raise ArgumentError(f"{shortened(value)} is not {_PLAIN[name][1]}", field, value)
        case ast.Attribute(attr=name) if type(value).__name__ != name:  # a message
            raise ArgumentError(f"{shortened(value)} is not {_words(kind)}", field, value)
    return value


def _fit_list(field: str, value: Any, item: ast.expr) -> Any:
    if not isinstance(value, Iterable) or isinstance(value, (str, bytes, Mapping)):
        raise ArgumentError(f"{shortened(value)} is not a list", field, value)
    if isinstance(item, ast.Name) and item.id in _ENDLESS:
        return value
    try:
        values = tuple(value)
    except TypeError as error:  # an array of no dimension
        raise ArgumentError(f"{shortened(value)} is not a list", field, value) from error
    return tuple(_fit(f"{field}[{i}]", v, item) for i, v in enumerate(values))


def _alternatives(kind: ast.expr) -> list[ast.expr]:
    if isinstance(kind, ast.BinOp):
        return [*_alternatives(kind.left), *_alternatives(kind.right)]
    return [kind]


def _fit_union(field: str, value: Any, kinds: list[ast.expr]) -> Any:
    wanted = [k for k in kinds if not (isinstance(k, ast.Constant) and k.value is None)]
    if value is None and len(wanted) < len(kinds):
        return None
    if len(wanted) == 1:
        return _fit(field, value, wanted[0])
    for kind in wanted:
        try:
            return _fit(field, value, kind)
        except ArgumentError:
            continue
    allowed = " or ".join(_words(kind) for kind in wanted)
    raise ArgumentError(f"{shortened(value)} is not {allowed}", field, value)


def _words(kind: ast.expr) -> str:
    if isinstance(kind, ast.Subscript):
        return f"a list of {_words(kind.slice)}"
    text = ast.unparse(kind)
    return _PLAIN[text][1] if text in _PLAIN else text


def _holder(value: Any, given: Mapping[str, Any]) -> str:
    """Return the argument that holds a value, or an empty text."""
    for name, found in given.items():
        if found is value:
            return name
        inner: Iterable[tuple[Any, Any]] = ()
        if isinstance(found, tuple):
            inner = enumerate(found)
        elif isinstance(found, dict):
            inner = found.items()
        if place := _holder(value, {f"{name}[{key!r}]": item for key, item in inner}):
            return place
    return ""
