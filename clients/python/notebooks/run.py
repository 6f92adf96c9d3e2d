"""Runs the notebooks from scratch, each in a fresh kernel.

Their outputs are written back, for the reader; with --check nothing is written, and a notebook
that fails, or that shows another text or another picture than the committed one, fails the run.
Their server is found as the package finds it. Usage: python run.py [--check] [NOTEBOOK...]
"""

from __future__ import annotations

import base64
import copy
import io
import os
import re
import sys
import time
from pathlib import Path
from typing import TYPE_CHECKING, Any

import matplotlib.image as mpl_image
import nbformat
import numpy as np
from nbclient import NotebookClient

if TYPE_CHECKING:
    from numpy.typing import NDArray

HERE = Path(__file__).parent
# Letters and edges may fall a pixel beside where they were; a curve that is gone changes more.
MOST_PIXELS = 0.001


def executed(notebook: Any) -> Any:
    """Run a copy of a notebook."""
    fresh = copy.deepcopy(notebook)
    for cell in fresh.cells:
        if cell.cell_type == "code":
            cell.outputs, cell.execution_count = [], None
    client = NotebookClient(
        fresh, timeout=120, kernel_name="python3", resources={"metadata": {"path": str(HERE)}}
    )
    client.execute()
    for cell in fresh.cells:
        # When a cell ran is no part of the notebook.
        cell.metadata.pop("execution", None)
    fresh.metadata = {
        "kernelspec": {"display_name": "Python 3", "language": "python", "name": "python3"},
        "language_info": {"name": "python"},
    }
    return fresh


def outputs(notebook: Any) -> list[Any]:
    """Return what the cells of a notebook show."""
    return [output for cell in notebook.cells for output in cell.get("outputs", [])]


def printed(output: Any) -> str:
    """Return the text of an output; that of a picture names its object and is no matter."""
    data = output.get("data", {})
    text = "" if "image/png" in data else output.get("text", "") or data.get("text/plain", "")
    # A digest changes with the particle table and the numerics.
    return re.sub("[0-9a-f]{16,}", "(digest)", text)


def picture(output: Any) -> NDArray[np.float32] | None:
    """Return the picture of an output as brightness of shape (height, width); None without one."""
    raw = output.get("data", {}).get("image/png")
    if raw is None:
        return None
    colours = mpl_image.imread(io.BytesIO(base64.b64decode(raw)), format="png")
    grey: NDArray[np.float32] = colours[..., :3].mean(axis=2)
    return grey


def difference(mine: Any, theirs: Any) -> str:
    """Say how an output differs from the committed one; empty where it does not."""
    if printed(mine) != printed(theirs):
        return f"says {printed(mine)!r} in place of {printed(theirs)!r}"
    drawn, committed = picture(mine), picture(theirs)
    if drawn is None or committed is None:
        return "" if drawn is committed else "has a picture too many or too few"
    if np.ptp(drawn) == 0:
        return "has an empty picture"
    if drawn.shape != committed.shape:
        return f"has a picture of {drawn.shape} pixels in place of {committed.shape}"
    changed = float(np.mean(np.abs(drawn - committed) > 1 / 8))
    return f"has a picture of which {changed:.2%} changed" if changed > MOST_PIXELS else ""


def differences(fresh: Any, notebook: Any) -> list[str]:
    """Say how a run differs from the committed notebook."""
    mine, theirs = outputs(fresh), outputs(notebook)
    if len(mine) != len(theirs):
        return [f"has {len(mine)} outputs in place of {len(theirs)}"]
    return [found for pair in zip(mine, theirs) if (found := difference(*pair))]


def main() -> int:
    """Run every notebook beside this file."""
    check = "--check" in sys.argv[1:]
    names = [argument for argument in sys.argv[1:] if argument != "--check"]
    os.environ["PYTHONPATH"] = os.pathsep.join(
        filter(None, [str(HERE.parent), os.environ.get("PYTHONPATH")])
    )
    os.environ.pop("MPLBACKEND", None)  # pictures belong into the notebook
    failed = 0
    for path in [HERE / name for name in names] or sorted(HERE.glob("*.ipynb")):
        before = time.monotonic()
        notebook = nbformat.read(path, as_version=4)  # type: ignore[no-untyped-call]
        fresh = executed(notebook)
        if not check:
            nbformat.write(fresh, path)  # type: ignore[no-untyped-call]
        elif found := differences(fresh, notebook):
            failed += 1
            print(f"{path.name} differs from the committed one; run {Path(__file__).name}:")
            print("\n".join(found))
        print(f"{path.name}: {len(fresh.cells)} cells in {time.monotonic() - before:.1f} s")
    return 1 if failed else 0


if __name__ == "__main__":
    sys.exit(main())
