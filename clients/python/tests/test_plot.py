"""Pictures show what they say: rungs left out are told, two products keep to their curves."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
import pytest

import kinegate
from kinegate.units import DEGREE

if TYPE_CHECKING:
    from numpy.typing import NDArray

pytest.importorskip("matplotlib")


def test_ladder_tells_of_lower_rungs(client: kinegate.Client) -> None:
    channels = client.open_channels("gamma p", beam="1.2 GeV")
    count = len([c for c in channels if c.threshold is not None])

    def labels(most: int) -> list[str]:
        return [t.get_text() for t in kinegate.plot.ladder(channels, most).get_yticklabels()]

    whole = labels(count)
    assert not any("lower" in name for name in whole)
    few = labels(4)
    assert few[0] == f"and {count - 4} lower ones"
    assert few[1:] == whole[-5:]  # four open ones and the next to open
    assert labels(count - 1)[0] == "and 1 lower one"
    with pytest.raises(kinegate.ArgumentError, match="most: 0 is not at least 1"):
        kinegate.plot.ladder(channels, 0)


@pytest.mark.parametrize(
    ("text", "beams"),
    [
        ("gamma p -> K+ Lambda", {"beam": "1.2 GeV"}),
        ("e- p -> e- p", {"beam": "18 GeV", "beam2": "275 GeV"}),
    ],
)
def test_two_products_keep_to_curves(
    client: kinegate.Client, text: str, beams: kinegate.Beams
) -> None:
    cosines = np.linspace(-1, 1, 21)
    solved = client.two_body(text, given={"rest_cosine": cosines}, **beams)
    axes = kinegate.plot.products(client.reaction(text, **beams))
    assert not axes.patches
    assert [line.get_label() for line in axes.lines] == text.partition("-> ")[2].split()
    for product, line in enumerate(axes.lines):
        drawn: NDArray[np.float64] = np.asarray(line.get_xydata())
        angles = solved.column("laboratory_angle_rad", product) / DEGREE
        momenta = solved.column("laboratory_momentum_gev", product)
        size = np.array([np.ptp(drawn[:, 0]), np.ptp(drawn[:, 1])])
        for point in np.column_stack([angles, momenta]):
            # Half the distance of two drawn points, at 721 for half a turn.
            assert np.hypot(*((drawn - point) / size).T).min() < 0.01


def test_other_products_have_ranges(client: kinegate.Client) -> None:
    crossing = client.reaction("e- p -> e- p", beam=18, beam2=275, angle=3.1)
    for answer in (client.reaction("gamma p -> p pi+ pi-", beam="1.2 GeV"), crossing):
        axes = kinegate.plot.products(answer)
        assert not axes.lines
        names = [f"{name}, ranges" for name in answer.products]
        assert [patch.get_label() for patch in axes.patches] == names
