"""Runs the notebooks from scratch, each in a fresh kernel.

Without arguments their outputs are written back, for the reader; with --check nothing is
written, and a notebook that fails, or that says another text than the committed one, fails
the run. Their server is found as the package finds it.
"""

from __future__ import annotations

import copy
import os
import re
import sys
import time
from pathlib import Path
from typing import Any

import nbformat
from nbclient import NotebookClient

HERE = Path(__file__).parent


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


def printed(notebook: Any) -> list[str]:
    """Return the texts that a notebook shows; pictures are left to the eye."""
    texts = []
    for cell in notebook.cells:
        for output in cell.get("outputs", []):
            data = output.get("data", {})
            if "image/png" not in data:
                text = output.get("text", "") or data.get("text/plain", "")
                # A digest changes with the particle table and the numerics.
                texts.append(re.sub("[0-9a-f]{16,}", "(digest)", text))
    return texts


def main() -> int:
    """Run every notebook beside this file."""
    check = "--check" in sys.argv[1:]
    os.environ["PYTHONPATH"] = os.pathsep.join(
        filter(None, [str(HERE.parent), os.environ.get("PYTHONPATH")])
    )
    os.environ.pop("MPLBACKEND", None)  # pictures belong into the notebook
    failed = 0
    for path in sorted(HERE.glob("*.ipynb")):
        before = time.monotonic()
        notebook = nbformat.read(path, as_version=4)  # type: ignore[no-untyped-call]
        fresh = executed(notebook)
        if not check:
            nbformat.write(fresh, path)  # type: ignore[no-untyped-call]
        elif printed(fresh) != printed(notebook):
            failed += 1
            print(f"{path.name}: says something else than committed; run {Path(__file__).name}")
        print(f"{path.name}: {len(fresh.cells)} cells in {time.monotonic() - before:.1f} s")
    return 1 if failed else 0


if __name__ == "__main__":
    sys.exit(main())
