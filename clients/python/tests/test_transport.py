"""TLS, client certificates, rotation and unix sockets."""

from __future__ import annotations

import datetime as dt
import ipaddress
import os
import time
from typing import TYPE_CHECKING, Any

import pytest
from cryptography import x509
from cryptography.hazmat.primitives import hashes, serialization
from cryptography.hazmat.primitives.asymmetric import ec

import kinegate

if TYPE_CHECKING:
    from pathlib import Path


class Authority:
    """Signs certificates for the tests."""

    def __init__(self, folder: Path) -> None:
        self.folder = folder
        folder.mkdir()
        self.key = ec.generate_private_key(ec.SECP256R1())
        self.name = x509.Name([x509.NameAttribute(x509.NameOID.COMMON_NAME, "test authority")])
        self.file = folder / "ca.pem"
        self._certify("ca", self.name, self.key, x509.BasicConstraints(ca=True, path_length=0))

    def issue(self, name: str) -> tuple[Path, Path]:
        key = ec.generate_private_key(ec.SECP256R1())
        subject = x509.Name([x509.NameAttribute(x509.NameOID.COMMON_NAME, name)])
        loopback = x509.IPAddress(ipaddress.ip_address("127.0.0.1"))
        names = x509.SubjectAlternativeName([x509.DNSName(name), loopback])
        certificate = self._certify(name, subject, key, names)
        file = self.folder / f"{name}.key"
        file.write_bytes(
            key.private_bytes(
                serialization.Encoding.PEM,
                serialization.PrivateFormat.PKCS8,
                serialization.NoEncryption(),
            )
        )
        return certificate, file

    def _certify(
        self,
        file: str,
        subject: x509.Name,
        key: ec.EllipticCurvePrivateKey,
        extension: x509.ExtensionType,
    ) -> Path:
        now = dt.datetime.now(dt.UTC)
        made = (
            x509.CertificateBuilder(self.name, subject, key.public_key())
            .serial_number(x509.random_serial_number())
            .not_valid_before(now - dt.timedelta(hours=1))
            .not_valid_after(now + dt.timedelta(hours=1))
            .add_extension(extension, critical=file == "ca")
            .sign(self.key, hashes.SHA256())
        )
        path = self.folder / f"{file}.pem"
        path.write_bytes(made.public_bytes(serialization.Encoding.PEM))
        return path


def test_tls_with_client_certificates_and_rotation(tmp_path: Path) -> None:
    old, new, callers = (Authority(tmp_path / n) for n in ("old", "new", "callers"))
    served = tmp_path / "tls.crt", tmp_path / "tls.key"

    def serve_with(authority: Authority) -> None:
        for made, place in zip(authority.issue("gate.test"), served, strict=True):
            made.rename(place)

    serve_with(old)
    certificate, key = callers.issue("caller")
    arguments = [
        *("--certificate-file", str(served[0]), "--key-file", str(served[1])),
        *("--client-ca-file", str(callers.file)),
    ]

    def answers(authority: Authority, **settings: Any) -> bool:
        with kinegate.connect(
            server.address, tls=True, ca_file=str(authority.file), timeout=2, **settings
        ) as client:
            try:
                return client.particle("p").name == "p"
            except (kinegate.DeadlineExceeded, kinegate.Unavailable):
                return False

    with kinegate.start_server(arguments=arguments) as server:
        mine = {"certificate_file": str(certificate), "key_file": str(key)}
        assert answers(old, **mine)
        assert answers(old, server_name="gate.test", **mine)
        assert not answers(old, server_name="another.test", **mine)
        assert not answers(old)  # without a certificate
        assert not answers(new, **mine)  # of an authority that is not trusted
        with (
            pytest.raises(kinegate.KinegateError),
            kinegate.connect(server.address, timeout=2) as plain,
        ):
            plain.particle("p")
        serve_with(new)
        deadline = time.monotonic() + 20  # files are looked at every 10 s
        while not answers(new, **mine):
            assert time.monotonic() < deadline, "the new certificate is not served"
            time.sleep(0.5)
        assert not answers(old, **mine)


def test_unix_sockets(tmp_path: Path, testdata: Path) -> None:
    gate, general = (f"unix:{os.fspath(tmp_path)}/{n}.sock" for n in ("gate", "general"))
    arguments = ["--gate-address", gate, "--general-address", general]
    sample = kinegate.Events.read_csv(testdata / "open" / "dimuon_2011A.csv")
    with (
        kinegate.start_server(arguments=arguments),
        kinegate.connect(general, gate_address=gate) as client,
    ):
        stream = client.judge(sample, testdata / "selections" / "dimuon.yaml")
        assert sum(len(v) for _, v in stream) == 3000
