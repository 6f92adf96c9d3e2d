"""Detectors: what measures simulated events."""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from typing import TYPE_CHECKING, Any, Final

from kinegate.channel import Range, angle_text
from kinegate.errors import InvalidArgument
from kinegate.faults import Check, fill
from kinegate.question import Question
from kinegate.tables import Table
from kinegate.units import format_energy, format_time
from kinegate.v1 import detector_pb2, generation_pb2

if TYPE_CHECKING:
    from collections.abc import Callable

__all__ = ["DetectorCheck", "DetectorLike", "check_detector"]

DetectorLike = str | Path | Mapping[str, Any] | detector_pb2.Detector
"""A YAML file or its text, or a mapping or a message of the same form."""

# The parts that see particles, and what each of them sees.
_SEEN: Final = {
    "calorimeter": "photons",
    "tracker": "charged particles",
    "recoil": "protons, direction only",
    "neutrals": "neutrons and K_L, direction only",
}


class DetectorCheck(Check[generation_pb2.CheckDetectorResponse]):
    """The result of a check: faults, or the detector as understood.

    >>> check = client.check_detector({"tracker": {
    ...     "theta": {"min_rad": 0.2, "max_rad": 2.4}, "constant": 0.015,
    ...     "angle_sigma_rad": 0.003}})
    >>> check.acceptance["tracker"].high, check.detector().tracker.constant
    (2.4, 0.015)
    """

    @property
    def acceptance(self) -> dict[str, Range]:
        """Polar angles from +z that each part sees, in radian; parts that are not there lack."""
        detector = self.message.detector
        spans = {p: getattr(detector, p).theta for p in _SEEN if detector.HasField(p)}
        return {part: Range(theta.min_rad, theta.max_rad) for part, theta in spans.items()}

    def detector(self) -> detector_pb2.Detector:
        """Return the detector as understood, or raise InvalidArgument with all faults."""
        self.refuse_faults("detector", InvalidArgument)
        return self.message.detector

    def understood(self) -> list[Table]:
        """Return the parts of the detector."""
        detector = self.message.detector
        rows = [
            [part, _SEEN[part], angle_text(span), _SPREADS[part](getattr(detector, part))]
            for part, span in self.acceptance.items()
        ]
        if detector.HasField("tagger"):
            rows.append(["tagger", "beam candidates", "", _tagger(detector.tagger)])
        if detector.HasField("vertex"):
            v = detector.vertex
            spread = ", ".join(f"{s * 1e3:.4g} mm" for s in (v.sigma_x_m, v.sigma_y_m, v.sigma_z_m))
            rows.append(["vertex", "interaction point", "", f"x, y, z: {spread}"])
        title = detector.name or "detector"
        columns = ("part", "sees", "angle from +z", "resolution")
        return [Table(title, columns, rows, detector.description)]


def check_detector(source: DetectorLike) -> Question[DetectorCheck]:
    """Ask for every fault of a detector at once; a faulty one is an answer, not an error.

    Args:
        source: A YAML file or its text, a mapping in the same form, or a message.

    >>> client.check_detector({"tracker": {"angle_sigma_rad": 0.003}}).faults[0].field
    'tracker.theta...'
    """
    request = generation_pb2.CheckDetectorRequest()
    fill(request, "detector", source)
    return Question("GenerationService", "CheckDetector", request, lambda r: DetectorCheck(r[0]))


def _calorimeter(part: detector_pb2.Calorimeter) -> str:
    terms = [
        f"{part.stochastic:.3g}/sqrt(E)" if part.stochastic else "",
        f"{part.constant:.3g}" if part.constant else "",
        f"{format_energy(part.noise_gev, 3)}/E" if part.noise_gev else "",
    ]
    spread = " and ".join(filter(None, terms))
    return f"sigma(E)/E {spread} in quadrature; {_mrad(part.theta_sigma_rad)} in theta"


def _tracker(part: detector_pb2.Tracker) -> str:
    terms = [
        f"{part.constant:.3g}" if part.constant else "",
        f"{part.per_gev:.3g} p/GeV" if part.per_gev else "",
    ]
    spread = " and ".join(filter(None, terms))
    return f"sigma(p)/p {spread} in quadrature; {_mrad(part.angle_sigma_rad)}"


def _direction(part: detector_pb2.DirectionDetector) -> str:
    return _mrad(part.angle_sigma_rad)


def _tagger(part: detector_pb2.Tagger) -> str:
    energy = f"{len(part.edges_gev) - 1} channels" if part.edges_gev else ""
    energy = energy or format_energy(part.sigma_gev, 3)
    return f"{energy}; {format_time(part.time_sigma_ns * 1e-9, 3)}"


def _mrad(value: float) -> str:
    return f"{value * 1e3:.3g} mrad"


_SPREADS: Final[dict[str, Callable[[Any], str]]] = {
    "calorimeter": _calorimeter,
    "tracker": _tracker,
    "recoil": _direction,
    "neutrals": _direction,
}
