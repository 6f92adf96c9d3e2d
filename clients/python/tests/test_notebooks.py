"""The check of the notebooks finds what a reader would miss: `notebooks/run.py --check`."""

from __future__ import annotations

import base64
import copy
import io
import runpy
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np
import pytest
from matplotlib import image

if TYPE_CHECKING:
    from collections.abc import Callable

FOLDER = Path(__file__).parent.parent / "notebooks"
RUN = runpy.run_path(str(FOLDER / "run.py"))


@pytest.fixture
def notebook() -> Any:
    return RUN["nbformat"].read(FOLDER / "open-channels.ipynb", as_version=4)


def repainted(output: Any, paint: Callable[[Any], Any]) -> None:
    """Change the picture of an output."""
    colours = image.imread(io.BytesIO(base64.b64decode(output["data"]["image/png"])), format="png")
    changed = io.BytesIO()
    image.imsave(changed, np.ascontiguousarray(paint(colours.copy())), format="png")
    output["data"]["image/png"] = base64.b64encode(changed.getvalue()).decode()


def without_a_curve(colours: Any) -> Any:
    """Make all that is of one colour, such as a curve and its line in the legend, white."""
    blue = np.abs(colours[..., :3] - (0x1F / 255, 0x77 / 255, 0xB4 / 255)).max(axis=2) < 0.3
    colours[blue] = 1
    return colours


def test_the_same_is_the_same(notebook: Any) -> None:
    fresh = copy.deepcopy(notebook)
    assert RUN["differences"](fresh, notebook) == []
    for output in RUN["outputs"](fresh):
        if "image/png" in output.get("data", {}):
            repainted(output, lambda colours: colours)  # other bytes, the same picture
    assert RUN["differences"](fresh, notebook) == []


@pytest.mark.parametrize(
    ("paint", "complaint"),
    [
        (np.ones_like, "an empty picture"),
        (lambda colours: colours[:, :-30], "pixels in place of"),
        (lambda colours: colours[::-1], "changed"),
        (without_a_curve, "changed"),
    ],
)
def test_every_changed_picture_is_found(
    notebook: Any, paint: Callable[[Any], Any], complaint: str
) -> None:
    count = len(RUN["outputs"](notebook))
    pictures = [
        i for i in range(count) if "image/png" in RUN["outputs"](notebook)[i].get("data", {})
    ]
    assert len(pictures) == 6
    for place in pictures:
        fresh = copy.deepcopy(notebook)
        repainted(RUN["outputs"](fresh)[place], paint)
        (found,) = RUN["differences"](fresh, notebook)
        assert complaint in found


def test_a_picture_that_is_gone_is_found(notebook: Any) -> None:
    fresh = copy.deepcopy(notebook)
    gone = next(o for o in RUN["outputs"](fresh) if "image/png" in o.get("data", {}))
    del gone["data"]["image/png"]
    assert RUN["differences"](fresh, notebook)
    cell = next(c for c in fresh.cells if gone in c.get("outputs", []))
    cell.outputs.remove(gone)
    assert "outputs in place of" in RUN["differences"](fresh, notebook)[0]
