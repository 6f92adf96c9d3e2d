"""The synchronous client."""

from __future__ import annotations

import copy
import functools
import inspect
import weakref
from pathlib import Path
from typing import TYPE_CHECKING, Any, Concatenate, ParamSpec, Self, TypeVar, Unpack

import grpc

from kinegate import errors, questions
from kinegate.arguments import checked
from kinegate.generation import GenerationLike, sample
from kinegate.generationstream import GenerationStream
from kinegate.judge import JudgeSettings, Settings
from kinegate.pulls import accepted_rows, of_best
from kinegate.selection import Selection, SelectionLike
from kinegate.stream import JudgeStream
from kinegate.stubs import Stubs
from kinegate.transport import DEFAULT_ADDRESS, DEFAULT_GATE_ADDRESS, ProcessGuard, Target

if TYPE_CHECKING:
    from collections.abc import Callable, Iterable, Mapping
    from types import TracebackType

    from kinegate.bound import Bound
    from kinegate.events import Events
    from kinegate.explanation import Explanation
    from kinegate.pulls import Pulls
    from kinegate.question import Question
    from kinegate.v1 import generation_pb2
    from kinegate.verdicts import Verdicts

__all__ = ["Client", "connect", "target"]

P = ParamSpec("P")
A = TypeVar("A")


def _asks(
    question: Callable[P, Question[A]],
) -> Callable[Concatenate[Client, P], A]:
    """Make a method that asks a question from the function that makes the question."""

    @functools.wraps(question)
    def method(self: Client, /, *args: P.args, **kwargs: P.kwargs) -> A:
        return self.ask(question(*args, **kwargs))

    return described(method, question)


def described(method: Callable[P, A], question: Callable[..., Any]) -> Callable[P, A]:
    """Give a method the signature of its question, for help() and notebooks."""
    signature = inspect.signature(question)
    first = inspect.Parameter("self", inspect.Parameter.POSITIONAL_ONLY)
    parameters = [first, *signature.parameters.values()]
    method.__signature__ = signature.replace(parameters=parameters)  # type: ignore[attr-defined]
    return method


class Client:
    """A connection to a server; :func:`connect` makes it.

    Every method asks one question and returns its answer, or raises a
    :class:`kinegate.ServerError`. A client may be used from several threads. It can be
    pickled, which is how it travels to spawned processes: there it connects anew.

    >>> client
    <client of 127.0.0.1:..., judging at 127.0.0.1:...>
    >>> client.reaction("gamma p -> K+ Lambda", beam="1.2 GeV").is_open
    True
    """

    def __init__(self, target: Target) -> None:
        self._target = target
        self._guard = ProcessGuard()
        self._channel = target.channel(target.address)
        self._stubs = Stubs(self._channel)
        self._streams: weakref.WeakSet[JudgeStream] = weakref.WeakSet()

    def __reduce__(self) -> tuple[object, ...]:
        return Client, (self._target,)

    def __repr__(self) -> str:
        return f"<{self._guard} of {self._target}>"

    def __enter__(self) -> Self:
        return self

    def __exit__(
        self,
        kind: type[BaseException] | None,
        error: BaseException | None,
        trace: TracebackType | None,
    ) -> None:
        self.close()

    def close(self) -> None:
        """Close the connection and with it every stream; a forked child leaves it alone."""
        if self._guard.foreign:
            return
        for stream in list(self._streams):
            stream.close()
        self._guard.close()
        self._channel.close()

    @property
    def stubs(self) -> Stubs:
        """The bare generated stubs of all services, on the client's own channel.

        A bare stub has no deadline and waits for ever; pass `timeout`.

        >>> from kinegate.v1 import info_pb2
        >>> info = client.stubs.info.GetInfo(info_pb2.GetInfoRequest(), timeout=10)
        >>> info.limits.block_event_count
        4096
        """
        self._guard.check()
        return self._stubs

    def with_timeout(self, seconds: float) -> Client:
        """Return this client with another deadline for its calls; the connection is shared.

        >>> client.with_timeout(30).particle("p").name
        'p'
        """
        # Not by copy.copy, which goes the way of pickle and would connect anew.
        other = Client.__new__(Client)
        vars(other).update(vars(self))
        other._target = self._target.with_timeout(seconds)  # noqa: SLF001  # its own copy
        return other

    def ask(self, question: Question[A]) -> A:
        """Ask a question and return its answer; the other methods are made of this.

        >>> client.ask(kinegate.questions.particle("K+")).spin
        0.0
        """
        rpc = self.stubs.rpc(question.service, question.method)
        request, replies = question.request, []
        while True:
            try:
                reply = rpc(request, timeout=self._target.timeout, wait_for_ready=True)
            except grpc.RpcError as error:
                raise errors.from_rpc(error, self._target.address) from None
            replies.append(reply)
            token: str = getattr(reply, "next_page_token", "")
            if not token or (question.enough and question.enough(replies)):
                return question.read(replies)
            request = copy.deepcopy(request)
            request.page_token = token

    particle = _asks(questions.particle)
    particles = _asks(questions.particles)
    reaction = _asks(questions.reaction)
    open_channels = _asks(questions.open_channels)
    two_body = _asks(questions.two_body)
    motion = _asks(questions.motion)
    decay = _asks(questions.decay)
    dalitz = _asks(questions.dalitz)
    photon_field = _asks(questions.photon_field)
    pair_creation = _asks(questions.pair_creation)
    field_pair = _asks(questions.field_pair)
    annihilation = _asks(questions.annihilation)
    compton = _asks(questions.compton)
    backscatter = _asks(questions.backscatter)
    info = _asks(questions.info)
    check = _asks(questions.check)
    check_generation = _asks(questions.check_generation)
    check_detector = _asks(questions.check_detector)

    def selection(self, source: SelectionLike) -> Selection:
        """Check a selection and return it ready to judge with.

        Args:
            source: A YAML file or its text, a mapping in the same form, a message, or a
                selection made before. `Selection.named` stands for one that the server
                knows.

        Raises:
            SelectionFaulty: The selection has faults, all of which the exception holds.

        >>> chosen = client.selection("testdata/selections/dimuon.yaml")
        >>> chosen.hypotheses["dimuon"].observables
        ['M']
        """
        if isinstance(source, Selection):
            return source
        return self.check(source).selection()

    def generation(self, source: GenerationLike) -> generation_pb2.Generation:
        """Check a generation and return it as understood.

        Args:
            source: A YAML file or its text, a mapping in the same form, or a message.

        Raises:
            InvalidArgument: The generation has faults, all of which the exception holds.

        >>> client.generation({"seed": 4, "channels": [{"reaction": "omega -> pi0 gamma"}]}).seed
        4
        """
        return self.check_generation(source).generation()

    def bound(self, source: GenerationLike, channel: int = 0, draws: int = 100_000) -> Bound:
        """Measure the weights of a channel, to choose its unweighting bound.

        Args:
            source: Anything that :meth:`generation` takes.
            channel: Position of the channel, from 0.
            draws: Number of draws, up to 10,000,000.

        >>> client.bound({"channels": [{"reaction": "D+ -> K- pi+ pi+ pi0"}]}, draws=20_000)
        weights of 20000 draws
        largest weight        0...
        mean weight           0...
        kept with this bound  ...%
        kept with bound 1     ...%
        """
        return self.ask(questions.bound(self.generation(source), channel, draws))

    def judge_block(
        self, events: Events, selection: SelectionLike, *, entries: str = "accepted"
    ) -> Verdicts:
        """Judge one block of events, at most 4,096, without opening a stream.

        >>> events = kinegate.Events.of(
        ...     px_gev=[[30.0, -30.0]], py_gev=[[2.0, 1.0]], pz_gev=[[5.0, 9.0]],
        ...     mass_gev=[[0.1056584, 0.1056584]], classes=[kinegate.POSITIVE, kinegate.NEGATIVE])
        >>> verdict = client.judge_block(events, "testdata/selections/dimuon.yaml")
        >>> verdict.observable("dimuon", "M").values
        array([60.1...])
        """
        chosen = self.selection(selection)
        return self.ask(chosen.judging(events, entries))

    def explain(
        self, events: Events, selection: SelectionLike, *, event: int = 0, most: int = 0
    ) -> Explanation:
        """Lay the verdict on one event open: assignments, windows, constraints and pulls.

        Args:
            events: A sample.
            selection: Anything that :meth:`selection` takes.
            event: Place of the event in the sample.
            most: Most assignments to list for a hypothesis, at most 1,000; 0 for 100.

        >>> sample = kinegate.Events.read_csv("testdata/open/dimuon_2011A.csv")
        >>> why = client.explain(sample, "testdata/selections/dimuon.yaml", event=1)
        >>> why.hypotheses["equal-plus"].accepted
        False
        """
        return self.ask(self.selection(selection).explaining(events, event, most))

    def pulls(
        self, events: Events, selection: SelectionLike, hypothesis: str, *, most: int = 1000
    ) -> Pulls:
        """Collect the pulls of the fits of accepted events; one call for each of them.

        Args:
            events: A sample.
            selection: Anything that :meth:`selection` takes.
            hypothesis: Name of a hypothesis with a fit.
            most: Number of accepted events after which to stop.

        >>> sample = client.generate(
        ...     {"channels": [{"reaction": "eta -> gamma gamma"}], "detector": {"calorimeter": {
        ...         "theta": {"min_rad": 0.1, "max_rad": 3}, "stochastic": 0.03,
        ...         "theta_sigma_rad": 0.01, "phi_sigma_rad": 0.01, "threshold_gev": 0.03}}},
        ...     500).read()
        >>> etas = {"name": "etas", "hypotheses": [{
        ...     "name": "eta", "reaction": "eta -> gamma gamma",
        ...     "fit": {"masses": [
        ...         {"products": ["gamma[0]", "gamma[1]"], "mass_gev": 0.547862}]}}]}
        >>> client.pulls(sample.events, etas, "eta", most=200)
        pulls of eta in 200 events
        parameter          pulls  mean    spread
        gamma[0] momentum  200    ...
        ...
        """
        chosen = self.selection(selection)
        blocks = [v.accepted for _, v in self.judge(events, chosen, entries="none")]
        rows = accepted_rows(blocks, hypothesis, most)
        return of_best(
            hypothesis, rows, [self.explain(events, chosen, event=int(row)) for row in rows]
        )

    def generate(
        self,
        source: GenerationLike,
        count: int,
        *,
        first: int = 0,
        truth: bool = True,
        events_per_block: int = 0,
        patience: float = 60.0,
        progress: bool = False,
    ) -> GenerationStream:
        """Generate simulated events; iterate over the stream for its blocks.

        Event i of a generation is the same event, to the bit, whatever call made it: a
        broken stream goes on where it ended.

        Args:
            source: A YAML file or its text, a mapping in the same form, or a message.
            count: Number of events.
            first: Number of the first event.
            truth: Also return the events as they were, without a detector always.
            events_per_block: Most events a block; 0 for as many as fit.
            patience: Seconds without a block after which a broken stream is given up.
            progress: Show a bar on standard error.

        >>> stream = client.generate(
        ...     {"seed": 1, "channels": [{"reaction": "omega -> pi0 gamma, pi0 -> gamma gamma"}]},
        ...     1000)
        >>> energies = [part.truth.momentum["energy_gev"] for part in stream]
        >>> sum(map(len, energies))  # pi0, gamma, gamma and gamma of each
        4000
        """
        chosen = self.generation(source) if isinstance(source, (str, Path)) else source
        wanted = sample(chosen, count, first, truth=truth, events_per_block=events_per_block)

        def call(request: Any) -> Any:
            return self.stubs.generation.GenerateEvents(request, wait_for_ready=True)

        return GenerationStream(wanted, call, self._target.address, patience, progress=progress)

    def judge(
        self,
        events: Events | Iterable[Events],
        selection: SelectionLike,
        **settings: Unpack[JudgeSettings],
    ) -> JudgeStream:
        """Judge events through a stream; iterate over it for (block, verdict) pairs.

        The stream keeps the rules of the protocol: credit, heartbeats and order. When the
        connection breaks it opens a new stream where the old one ended, with the same
        digest, and sends again what was not answered. Events are read at most a few
        blocks ahead of the verdicts that have been taken.

        Args:
            events: A sample, which is cut into blocks, or an iterable of blocks that may
                go on for ever. It is read in a thread of its own.
            selection: Anything that :meth:`selection` takes.
            settings: Any of :class:`kinegate.JudgeSettings`: `entries`, `events_per_block`,
                `latency_budget`, `late`, `follow`, `first_sequence`, `patience`, `progress`.

        >>> sample = kinegate.Events.read_csv("testdata/open/dimuon_2011A.csv")
        >>> with client.judge(sample, "testdata/selections/dimuon.yaml") as stream:
        ...     for block, verdict in stream:
        ...         print(len(block), verdict.gate.sum())
        1000 1000
        1000 1000
        1000 1000
        """
        self._guard.check()
        chosen = self.selection(selection)
        stream = JudgeStream(self._target, events, checked(Settings)(chosen, **settings))
        self._streams.add(stream)
        return stream


def connect(  # noqa: PLR0913  # each is a setting of its own
    address: str | None = None,
    *,
    gate_address: str | None = None,
    timeout: float = 10.0,
    tls: bool = False,
    ca_file: str | None = None,
    certificate_file: str | None = None,
    key_file: str | None = None,
    server_name: str | None = None,
    options: Mapping[str, Any] | None = None,
) -> Client:
    """Prepare a connection to a server; the first call waits for it.

    Calls go round all replicas behind a name, wait for a server to be ready, are tried
    again where the server says that this may help, and end after `timeout`.

    Args:
        address: Where calls go: "host:port", "dns:///name:port" for all replicas behind a
            name, or "unix:/path". By default a server on this machine.
        gate_address: Where judge streams go; `address` by default.
        timeout: Deadline of a call in second; a server cuts it to a minute.
        tls: Use TLS, which servers ask for beyond loopback and unix sockets.
        ca_file: PEM file of the authorities to trust; those of the system by default.
        certificate_file: PEM file of the client's own certificate, with `key_file`.
        key_file: PEM file of its key.
        server_name: Name in the server's certificate, if not that of the address.
        options: Channel options of gRPC that override those of this package.

    >>> with kinegate.connect(server.address) as one:
    ...     one.reaction("gamma p -> p eta").threshold
    0.7078...
    """
    return Client(
        target(
            address,
            gate_address=gate_address,
            timeout=timeout,
            tls=tls,
            ca_file=ca_file,
            certificate_file=certificate_file,
            key_file=key_file,
            server_name=server_name,
            options=options or {},
        )
    )


def target(address: str | None, *, gate_address: str | None, **others: Any) -> Target:
    """Fill in the default addresses."""
    make = checked(Target)
    if address is None:
        return make(DEFAULT_ADDRESS, gate_address or DEFAULT_GATE_ADDRESS, **others)
    return make(address, gate_address or address, **others)
