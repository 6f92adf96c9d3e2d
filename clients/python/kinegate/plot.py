"""Pictures with matplotlib, where it is installed.

Every function draws into the axes given, or into a new figure, and returns the axes.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, Any

import numpy as np

from kinegate.arguments import array
from kinegate.errors import ArgumentError
from kinegate.frames import needed
from kinegate.pulls import Pulls
from kinegate.units import DEGREE, format_energy

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import ArrayLike, NDArray

    from kinegate.backscatter import Backscatter
    from kinegate.channel import Limits
    from kinegate.compton import Compton
    from kinegate.dalitz import Dalitz
    from kinegate.detector import DetectorCheck
    from kinegate.openchannels import OpenChannels
    from kinegate.photonfield import PhotonField
    from kinegate.reaction import Reaction

__all__ = [
    "absorption",
    "acceptance",
    "dalitz",
    "histogram",
    "ladder",
    "products",
    "pulls",
    "scattering",
    "spectrum",
]

_METRES_PER_KPC = 3.0856775814913673e19


def ladder(channels: OpenChannels, most: int = 20, axes: Any = None) -> Any:
    """Draw open channels as rungs over the beam energy at threshold, and what opens next.

    Args:
        channels: The answer of `client.open_channels`.
        most: Largest number of open rungs: of many, the highest ones, whose thresholds are
            nearest to the beam. How many lower ones are left out stands below them.
        axes: Where to draw.

    >>> kinegate.plot.ladder(client.open_channels("gamma p", beam="1.2 GeV")).get_xlabel()
    'beam energy at threshold (GeV)'
    """
    if most < 1:
        raise ArgumentError(f"{most} is not at least 1", "most", most)
    axes = _axes(axes, height=0.28 * min(most, len(channels)) + 1.2)
    every = [c for c in channels if c.threshold is not None]
    rungs = every[-most:]
    lower = len(every) - len(rungs)
    following = channels.next_to_open
    shown = [*rungs, *([following] if following and following.threshold is not None else [])]
    for height, channel in enumerate(shown):
        closed = channel is following
        threshold = channel.threshold or 0.0
        axes.hlines(
            height,
            threshold,
            _right(shown),
            color="0.75" if closed else "tab:blue",
            lw=6,
            alpha=0.5,
        )
        axes.plot([threshold], [height], "o", color="0.5" if closed else "tab:blue", ms=5)
    beam = _beam_energy(channels)
    if beam is not None:
        axes.axvline(beam, color="tab:red", lw=1.5)
        axes.text(beam, len(shown) - 0.4, f" beam {format_energy(beam, 4)}", color="tab:red")
    names = [c.name for c in shown]
    if lower:
        axes.set_yticks(range(-1, len(shown)), [_lower_ones(lower), *names])
    else:
        axes.set_yticks(range(len(shown)), names)
    axes.set_ylim(-1.7 if lower else -0.7, len(shown) + 0.4)
    axes.set_xlim(right=_right(shown))
    axes.set_xlabel("beam energy at threshold (GeV)")
    axes.spines[["top", "right"]].set_visible(False)
    return axes


def products(reaction: Reaction, axes: Any = None) -> Any:
    """Draw where each product can go: laboratory momentum against angle.

    Of two products that move along +z together each keeps to a curve; else the ranges of
    momentum and angle are drawn, which not every pair of values within need reach.

    >>> kinegate.plot.products(client.reaction("gamma p -> p eta", beam="1.2 GeV")).get_ylabel()
    'momentum (GeV)'
    """
    axes = _axes(axes)
    boost = _two_body_boost(reaction)
    for number, (name, limits) in enumerate(reaction.products.items()):
        if boost is not None:
            angles, momenta = _curve(limits, *boost)
            axes.plot(angles / DEGREE, momenta, color=f"C{number}", label=name)
        else:
            _ranges(axes, limits, f"C{number}", f"{name}, ranges")
    axes.autoscale_view()
    axes.set_ylim(bottom=0)
    axes.set_xlabel("angle in the laboratory (deg)")
    axes.set_ylabel("momentum (GeV)")
    axes.legend(frameon=False)
    return axes


def dalitz(
    answer: Dalitz, pairs: tuple[str, str] = ("first_second", "second_third"), axes: Any = None
) -> Any:
    """Draw the boundary of a Dalitz plot at each energy.

    Args:
        answer: The answer of `client.dalitz`.
        pairs: The pairs on the two axes, members of :class:`kinegate.Boundary`.
        axes: Where to draw.

    >>> axes = kinegate.plot.dalitz(client.dalitz("omega -> pi+ pi- pi0"))
    >>> axes.get_xlabel()
    'M²(pi+ pi-) (GeV²)'
    """
    axes = _axes(axes)
    for boundary in answer.boundaries:
        x, y = (getattr(boundary, name) for name in pairs)
        if len(x):
            label = f"√s = {format_energy(boundary.sqrt_s, 4)}"
            axes.plot(np.append(x, x[:1]), np.append(y, y[:1]), label=label)
    labels = dict(zip(("first", "second", "third"), answer.bodies, strict=True))
    for setter, pair in zip((axes.set_xlabel, axes.set_ylabel), pairs, strict=True):
        one, other = pair.split("_")
        setter(f"M²({labels[one]} {labels[other]}) (GeV²)")
    axes.legend(frameon=False)
    return axes


def pulls(values: ArrayLike | Pulls, names: Sequence[str] = (), axes: Any = None) -> Any:
    """Draw pulls against the unit normal distribution they should follow.

    Args:
        values: The answer of `client.pulls`, or pulls of shape (events,) or (events, n);
            what is not finite is left out.
        names: Names of the n; those of the answer by default.
        axes: Where to draw.

    >>> kinegate.plot.pulls([[-0.3, 0.2], [1.1, -0.9]], ["E", "theta"]).get_xlabel()
    'pull'
    """
    axes = _axes(axes)
    if isinstance(values, Pulls):
        names = names or list(values.columns)
        values = np.column_stack(list(values.columns.values()))
    table = np.atleast_2d(np.asarray(values, np.float64).T)
    edges = np.linspace(-5, 5, 51)
    for number, column in enumerate(table):
        finite = column[np.isfinite(column)]
        name = names[number] if number < len(names) else f"{number}"
        label = f"{name}: mean {finite.mean():.2f}, spread {finite.std():.2f}"
        axes.hist(finite, edges, density=True, histtype="step", label=label)
    x = np.linspace(-5, 5, 201)
    axes.plot(x, np.exp(-x * x / 2) / np.sqrt(2 * np.pi), color="0.4", ls="--", label="unit normal")
    axes.set_xlabel("pull")
    axes.legend(frameon=False)
    return axes


def histogram(
    values: ArrayLike,
    bins: ArrayLike | int = 50,
    *,
    weights: ArrayLike | None = None,
    label: str = "",
    axes: Any = None,
) -> Any:
    """Draw a weighted histogram as steps with the spread that counting gives.

    >>> kinegate.plot.histogram([1.0, 1.2, 1.9], 3).get_ylabel()
    'entries'
    """
    axes = _axes(axes)
    x = array("values", values, np.float64)
    w = np.ones(len(x)) if weights is None else array("weights", weights, np.float64)
    counts, edges = np.histogram(x, bins, weights=w)
    spread = np.sqrt(np.histogram(x, edges, weights=w * w)[0])
    (line,) = (axes.stairs(counts, edges, label=label or None),)
    centres = (edges[1:] + edges[:-1]) / 2
    axes.errorbar(centres, counts, spread, fmt="none", ecolor=line.get_edgecolor(), lw=0.8)
    axes.set_ylabel("entries")
    if label:
        axes.legend(frameon=False)
    return axes


def absorption(field: PhotonField, label: str = "", axes: Any = None) -> Any:
    """Draw how far photons come in a field: mean free path in kiloparsec against energy.

    Args:
        field: The answer of `client.photon_field`.
        label: Name of the field in the legend.
        axes: Where to draw.

    >>> field = client.photon_field([1e5, 1e6, 1e7], temperature=2.7255)
    >>> kinegate.plot.absorption(field).get_yscale()
    'log'
    """
    paths = field.mean_free_path / _METRES_PER_KPC
    seen = np.isfinite(paths)
    names = {"xlabel": "photon energy (GeV)", "ylabel": "mean free path (kpc)"}
    scales = {"xscale": "log", "yscale": "log"}
    return _line(axes, field.energies[seen], paths[seen], label, **names, **scales)


def spectrum(beam: Backscatter, label: str = "", axes: Any = None) -> Any:
    """Draw the spectrum of a photon beam that light makes.

    Args:
        beam: The answer of `client.backscatter` with `points`.
        label: Name of the beam in the legend.
        axes: Where to draw.

    >>> beam = client.backscatter("e-", beam="3 GeV", light="351.1 nm", points=100)
    >>> kinegate.plot.spectrum(beam).get_xlabel()
    'photon energy (GeV)'
    """
    names = {"xlabel": "photon energy (GeV)", "ylabel": "cross-section (barn/GeV)"}
    return _line(axes, beam.energies, beam.spectrum, label, ylim=(0, None), **names)


def scattering(answer: Compton, label: str = "", axes: Any = None) -> Any:
    """Draw how a photon is scattered: cross-section for each solid angle against angle.

    Args:
        answer: The answer of `client.compton` with `angles`.
        label: Name of the curve in the legend.
        axes: Where to draw.

    >>> answer = client.compton("e-", photon="1 MeV", angles=["0 deg", "90 deg", "180 deg"])
    >>> kinegate.plot.scattering(answer).get_xlabel()
    'angle of the photon (deg)'
    """
    names = {"xlabel": "angle of the photon (deg)", "ylabel": "cross-section (mb/sr)"}
    degrees = answer.angles / DEGREE
    return _line(axes, degrees, answer.differential * 1e3, label, ylim=(0, None), **names)


def acceptance(detector: DetectorCheck, axes: Any = None) -> Any:
    """Draw which polar angles each part of a detector sees.

    >>> tracker = {"theta": {"min_rad": 0.2, "max_rad": 2.4}, "constant": 0.015,
    ...            "angle_sigma_rad": 0.003}
    >>> axes = kinegate.plot.acceptance(client.check_detector({"tracker": tracker}))
    >>> [label.get_text() for label in axes.get_yticklabels()]
    ['tracker']
    """
    spans = detector.acceptance
    axes = _axes(axes, height=0.4 * len(spans) + 1)
    for height, span in enumerate(spans.values()):
        axes.barh(height, (span.high - span.low) / DEGREE, left=span.low / DEGREE, height=0.5)
    axes.set_yticks(range(len(spans)), list(spans))
    axes.set_xlim(0, 180)
    axes.set_xlabel("angle from +z (deg)")
    axes.spines[["top", "right"]].set_visible(False)
    return axes


def _axes(axes: Any, height: float = 4.0) -> Any:
    if axes is not None:
        return axes
    _, axes = needed("matplotlib.pyplot").subplots(figsize=(6.4, height), layout="constrained")
    return axes


def _line(
    axes: Any, x: NDArray[np.float64], y: NDArray[np.float64], label: str, **settings: Any
) -> Any:
    axes = _axes(axes)
    axes.plot(x, y, label=label or None)
    axes.set(**settings)
    if label:
        axes.legend(frameon=False)
    return axes


def _lower_ones(count: int) -> str:
    return f"and {count} lower {'one' if count == 1 else 'ones'}"


def _two_body_boost(reaction: Reaction) -> tuple[float, float] | None:
    """Return beta gamma and gamma of two products along z; None for any other reaction."""
    limits = list(reaction.products.values())
    total = reaction.message.centre_of_mass.total
    across = math.hypot(total.px_gev, total.py_gev)
    fixed = all(math.isclose(x.rest_momentum.low, x.rest_momentum.high) for x in limits)
    sqrt_s = reaction.sqrt_s
    if len(limits) != 2 or not fixed or not sqrt_s or across > 1e-9 * total.energy_gev:  # noqa: PLR2004
        return None
    return total.pz_gev / sqrt_s, total.energy_gev / sqrt_s


def _curve(
    limits: Limits, beta_gamma: float, gamma: float
) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Return laboratory angles and momenta for every angle in the centre of mass."""
    angle = np.linspace(0, np.pi, 721)
    along = gamma * limits.rest_momentum.high * np.cos(angle)
    along += beta_gamma * limits.rest_energy.high
    across = limits.rest_momentum.high * np.sin(angle)
    return np.arctan2(across, along), np.hypot(across, along)


def _ranges(axes: Any, limits: Limits, color: str, label: str) -> None:
    low, high = limits.angle.low / DEGREE, limits.angle.high / DEGREE
    corner = (low, limits.momentum.low)
    span = (high - low, limits.momentum.high - limits.momentum.low)
    rectangle = needed("matplotlib.patches").Rectangle
    axes.add_patch(rectangle(corner, *span, color=color, alpha=0.25, label=label))


def _right(channels: Sequence[Any]) -> float:
    return float(1.08 * max(c.threshold for c in channels))


def _beam_energy(channels: OpenChannels) -> float | None:
    """Return the energy of a beam on a target at rest: that of the total motion less the mass."""
    total = channels.message.centre_of_mass.total
    momentum: float = math.hypot(total.px_gev, total.py_gev, total.pz_gev)
    return momentum if momentum > 0 else None
