"""Pictures with matplotlib, where it is installed.

Every function draws into the axes given, or into a new figure, and returns the axes.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, Any

import numpy as np

from kinegate.frames import needed
from kinegate.units import DEGREE, format_energy

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import ArrayLike

    from kinegate.dalitz import Dalitz
    from kinegate.openchannels import OpenChannels
    from kinegate.reaction import Reaction

__all__ = ["dalitz", "histogram", "ladder", "products", "pulls"]


def ladder(channels: OpenChannels, most: int = 20, axes: Any = None) -> Any:
    """Draw open channels as rungs over the beam energy at threshold, and what opens next.

    Args:
        channels: The answer of `client.open_channels`.
        most: Largest number of rungs, the highest ones of many.
        axes: Where to draw.

    >>> kinegate.plot.ladder(client.open_channels("gamma p", beam="1.2 GeV")).get_xlabel()
    'beam energy at threshold (GeV)'
    """
    axes = _axes(axes, height=0.28 * min(most, len(channels)) + 1.2)
    rungs = [c for c in channels if c.threshold is not None][-most:]
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
    axes.set_yticks(range(len(shown)), [c.name for c in shown])
    axes.set_ylim(-0.7, len(shown) + 0.4)
    axes.set_xlim(right=_right(shown))
    axes.set_xlabel("beam energy at threshold (GeV)")
    axes.spines[["top", "right"]].set_visible(False)
    return axes


def products(reaction: Reaction, axes: Any = None) -> Any:
    """Draw where each product can go: laboratory momentum against angle.

    >>> kinegate.plot.products(client.reaction("gamma p -> p eta", beam="1.2 GeV")).get_ylabel()
    'momentum (GeV)'
    """
    axes = _axes(axes)
    patches = needed("matplotlib.patches")
    for number, (name, limits) in enumerate(reaction.products.items()):
        color = f"C{number}"
        low, high = limits.angle.low / DEGREE, limits.angle.high / DEGREE
        span = (high - low, limits.momentum.high - limits.momentum.low)
        axes.add_patch(
            patches.Rectangle(
                (low, limits.momentum.low), *span, color=color, alpha=0.25, label=name
            )
        )
    axes.autoscale_view()
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


def pulls(values: ArrayLike, names: Sequence[str] = (), axes: Any = None) -> Any:
    """Draw pulls against the unit normal distribution they should follow.

    Args:
        values: Pulls of shape (events,) or (events, n); what is not finite is left out.
        names: Names of the n.
        axes: Where to draw.

    >>> kinegate.plot.pulls([[-0.3, 0.2], [1.1, -0.9]], ["E", "theta"]).get_xlabel()
    'pull'
    """
    axes = _axes(axes)
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
    x = np.asarray(values, np.float64)
    w = np.ones(len(x)) if weights is None else np.asarray(weights, np.float64)
    counts, edges = np.histogram(x, bins, weights=w)
    spread = np.sqrt(np.histogram(x, edges, weights=w * w)[0])
    (line,) = (axes.stairs(counts, edges, label=label or None),)
    centres = (edges[1:] + edges[:-1]) / 2
    axes.errorbar(centres, counts, spread, fmt="none", ecolor=line.get_edgecolor(), lw=0.8)
    axes.set_ylabel("entries")
    if label:
        axes.legend(frameon=False)
    return axes


def _axes(axes: Any, height: float = 4.0) -> Any:
    if axes is not None:
        return axes
    _, axes = needed("matplotlib.pyplot").subplots(figsize=(6.4, height), layout="constrained")
    return axes


def _right(channels: Sequence[Any]) -> float:
    return float(1.08 * max(c.threshold for c in channels))


def _beam_energy(channels: OpenChannels) -> float | None:
    """Return the energy of a beam on a target at rest: that of the total motion less the mass."""
    total = channels.message.centre_of_mass.total
    momentum: float = math.hypot(total.px_gev, total.py_gev, total.pz_gev)
    return momentum if momentum > 0 else None
