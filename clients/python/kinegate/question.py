"""What every unary rpc has in common: a question is asked, an answer is read.

A topic of the contract is one module here: a function that makes the :class:`Question`
from plain arguments and a subclass of :class:`Answer` that reads the reply. Clients,
synchronous and asyncio, get a method from the function by one line each.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Generic, TypeVar

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from google.protobuf.message import Message

    from kinegate.tables import Table

__all__ = ["Answer", "Question"]

M = TypeVar("M", bound="Message")
A_co = TypeVar("A_co", covariant=True)


@dataclass(frozen=True)
class Question(Generic[A_co]):
    """A request together with how its reply is read; `client.ask` takes it.

    >>> question = kinegate.questions.reaction("gamma p -> p eta")
    >>> question.method, client.ask(question).threshold
    ('DescribeReaction', 0.7078...)
    """

    service: str
    """Name of the service, such as "ReactionService"."""
    method: str
    """Name of the rpc."""
    request: Any
    """The request message."""
    read: Callable[[Sequence[Any]], A_co]
    """Turns the replies, one a page, into the answer."""
    enough: Callable[[Sequence[Any]], bool] | None = None
    """Says whether the pages so far suffice; None fetches all of them."""


class Answer(Generic[M]):
    """A reply with its numbers as plain floats in base units, shown as a table.

    `message` is the reply itself, for what the properties leave out.

    >>> client.particle("p").message.mass_gev
    0.93827208...
    """

    def __init__(self, message: M) -> None:
        self.message: M = message

    def tables(self) -> list[Table]:
        """Return the tables that show the answer."""
        raise NotImplementedError

    def __str__(self) -> str:
        return "\n\n".join(map(str, self.tables()))

    __repr__ = __str__

    def _repr_html_(self) -> str:
        return "".join(table._repr_html_() for table in self.tables())

    def __reduce__(self) -> tuple[object, ...]:
        return type(self), (self.message,)
