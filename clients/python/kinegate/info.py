"""What the running server is."""

from __future__ import annotations

from kinegate.question import Answer, Question
from kinegate.tables import Table
from kinegate.v1 import info_pb2

__all__ = ["Info", "info"]


class Info(Answer[info_pb2.GetInfoResponse]):
    """Versions, limits and selections of the server.

    >>> client.info().caution
    '...safety...'
    """

    @property
    def version(self) -> str:
        """Version of the program."""
        return self.message.version

    @property
    def numerics_version(self) -> int:
        """Version of the numerics; any change of bits raises it."""
        return self.message.numerics_version

    @property
    def caution(self) -> str:
        """What the program must not be used for."""
        return self.message.caution

    @property
    def selections(self) -> dict[str, list[str]]:
        """Digests, newest first, of each selection that the server knows by name."""
        return {s.name: list(s.digests) for s in self.message.selections}

    def tables(self) -> list[Table]:
        """Return versions and selections."""
        rows = [
            ["version", self.version],
            ["numerics", str(self.numerics_version)],
            ["particle table", self.message.table_version],
            ["selections", ", ".join(self.selections) or "none"],
        ]
        return [Table("kinegate server", (), rows, self.caution)]


def info() -> Question[Info]:
    """Ask for versions, limits, known selections and the caution.

    >>> client.info().numerics_version >= 1
    True
    """
    return Question("InfoService", "GetInfo", info_pb2.GetInfoRequest(), lambda r: Info(r[0]))
