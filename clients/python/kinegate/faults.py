"""Faults of what has a file form: selections, generations and detectors."""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from typing import TYPE_CHECKING, Any, TypeVar

from google.protobuf import json_format

from kinegate.arguments import text_of
from kinegate.errors import ArgumentError, FieldViolation, InvalidArgument, shortened
from kinegate.question import Answer
from kinegate.tables import Table

if TYPE_CHECKING:
    from collections.abc import Sequence

    from google.protobuf.message import Message

__all__ = ["Check", "fill"]

M = TypeVar("M", bound="Message")


class Check(Answer[M]):
    """The result of a check: faults, or what was understood.

    >>> check = client.check_detector({"calorimeter": {"theta": {"min_rad": 2, "max_rad": 1}}})
    >>> len(check.faults) > 1
    True
    """

    @property
    def faults(self) -> list[FieldViolation]:
        """Every fault, with its place in the text where there is one."""
        found: Sequence[Any] = self.message.faults  # type: ignore[attr-defined]  # all have it
        return [
            FieldViolation(f"{f.line}:{f.column}: {f.field}" if f.line else f.field, f.message)
            for f in found
        ]

    def refuse_faults(self, what: str, kind: type[InvalidArgument], reason: str = "") -> None:
        """Raise an exception that holds all faults, if there are any."""
        if not self.faults:
            return
        lines = "; ".join(f"{f.field}: {f.description}" for f in self.faults)
        raise kind(
            f"the {what} has {len(self.faults)} faults: {lines}",
            code="INVALID_ARGUMENT",
            reason=reason,
            violations=self.faults,
        )

    def tables(self) -> list[Table]:
        """Return the faults, or what was understood."""
        if not self.faults:
            return self.understood()
        rows = [[f.field, f.description] for f in self.faults]
        return [Table(f"{len(rows)} faults", ("field", "fault"), rows)]

    def understood(self) -> list[Table]:
        """Return the tables that show what has no faults."""
        raise NotImplementedError


def fill(request: Any, member: str, source: Any) -> None:
    """Write what is to be checked into a request: a file, its text, a mapping or a message."""
    target = getattr(request, member)
    if isinstance(source, type(target)):
        target.CopyFrom(source)
    elif isinstance(source, Mapping):
        target.SetInParent()
        parse(source, target)
    elif isinstance(source, Path) or (isinstance(source, str) and "\n" not in source):
        # A text of one line is the name of a file: nothing with a file form fits on one.
        request.yaml = text_of(member, source)
    elif isinstance(source, str):
        request.yaml = source
    else:
        allowed = f"a YAML file or its text, a mapping, or a {type(target).__name__} message"
        raise ArgumentError(f"{shortened(source)} is not {allowed}", member, source)


def parse(source: Mapping[str, Any], target: Message) -> None:
    """Write a mapping in the form of the file into a message."""
    try:
        json_format.ParseDict(dict(source), target)
    except json_format.ParseError as error:
        name = target.DESCRIPTOR.name.lower()
        raise InvalidArgument(f"the {name} cannot be read: {error}", "INVALID_ARGUMENT") from None
