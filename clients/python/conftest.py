"""A server of its own for tests and documented examples."""

from __future__ import annotations

import os
import sys
from pathlib import Path
from typing import TYPE_CHECKING, Any

os.environ.setdefault("MPLBACKEND", "Agg")

import numpy as np
import pytest

import kinegate

if TYPE_CHECKING:
    from collections.abc import Iterator

ROOT = Path(__file__).parent.parent.parent


@pytest.fixture(scope="session")
def server() -> Iterator[kinegate.LocalServer]:
    """A running server."""
    with kinegate.start_server() as running:
        yield running


@pytest.fixture(scope="session")
def client(server: kinegate.LocalServer) -> Iterator[kinegate.Client]:
    """A client of the server."""
    with server.connect() as connected:
        yield connected


@pytest.fixture
def testdata() -> Path:
    """The folder of data that the project did not make, and of selections."""
    return ROOT / "testdata"


def fitted() -> dict[str, Any]:
    """Return an event of two photons, and a selection that binds them to the mass of a pi0."""
    masses = [{"products": ["gamma[0]", "gamma[1]"], "mass_gev": 0.1349768}]
    pi0 = {"name": "pi0", "reaction": "pi0 -> gamma gamma", "fit": {"masses": masses}}
    photons = kinegate.Events.of(
        momentum_gev=[[0.31, 0.24]],
        theta_rad=[[0.30, 0.70]],
        phi_rad=[[0.0, 0.3]],
        classes=[kinegate.PHOTON, kinegate.PHOTON],
        covariance=np.tile([1e-4, 0, 0, 1e-4, 0, 1e-3], (2, 1)),
    )
    return {"photons": photons, "pions": {"name": "pions", "hypotheses": [pi0]}}


@pytest.fixture(autouse=True)
def examples(
    request: pytest.FixtureRequest,
    doctest_namespace: dict[str, Any],
    monkeypatch: pytest.MonkeyPatch,
) -> Iterator[None]:
    """What documented examples take for granted: a client, a fit, and the root of the clone."""
    if request.node.__class__.__name__ == "DoctestItem":
        monkeypatch.chdir(ROOT)
        doctest_namespace["kinegate"] = kinegate
        doctest_namespace["np"] = np
        doctest_namespace.update(fitted())
        for name in ("server", "client"):
            doctest_namespace[name] = request.getfixturevalue(name)
    yield
    if pyplot := sys.modules.get("matplotlib.pyplot"):
        pyplot.close("all")
