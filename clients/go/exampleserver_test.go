package kinegate_test

import (
	"context"
	"crypto/ecdsa"
	"crypto/elliptic"
	"crypto/rand"
	"crypto/x509"
	"encoding/pem"
	"math/big"
	"net"
	"os"
	"path/filepath"
	"time"

	"example.org/kinegate/service/server"
)

// exampleServer is a server in this process, as "kinegate serve" is one in a process of its
// own. Its addresses are unix sockets, and stay the same over a restart.
type exampleServer struct {
	// general answers calls, gate judge streams; with a certificate they are TCP ports.
	general, gate string
	// certificate and key are the files of a certificate for "localhost", which is its own
	// authority and good for servers and callers.
	certificate, key string

	folder string
	server *server.Server
	served chan error
}

func startServer() *exampleServer {
	s := newExampleServer()
	s.start()
	return s
}

// startTLSServer starts a server on a free port that asks callers for a certificate too.
func startTLSServer() *exampleServer {
	s := newExampleServer()
	s.certificate, s.key = writeCertificate(s.folder)
	s.start()
	return s
}

func newExampleServer() *exampleServer {
	folder, err := os.MkdirTemp("", "kg") // paths of sockets are short
	check(err)
	return &exampleServer{folder: folder}
}

func (s *exampleServer) start() {
	options := server.Defaults()
	options.GeneralAddress = "unix:" + filepath.Join(s.folder, "general.sock")
	options.GateAddress = "unix:" + filepath.Join(s.folder, "gate.sock")
	options.HealthAddress, options.MetricsAddress, options.DebugAddress, options.DrainNotice = "", "", "", 0
	if s.certificate != "" {
		options.GeneralAddress, options.GateAddress = "127.0.0.1:0", "127.0.0.1:0"
		options.CertificateFile, options.KeyFile, options.ClientCAFile = s.certificate, s.key, s.certificate
	}
	var err error
	s.server, err = server.New(options, server.Deps{Version: "example"})
	check(err)
	ctx := context.Background()
	check(s.server.Listen(ctx))
	s.general, s.gate = options.GeneralAddress, options.GateAddress
	if s.certificate != "" {
		s.general, s.gate = s.server.Addr(server.General).String(), s.server.Addr(server.Gate).String()
	}
	s.served = make(chan error, 1)
	go func() { s.served <- s.server.Serve(ctx) }()
}

// leave ends the server as SIGTERM does.
func (s *exampleServer) leave() {
	_ = s.server.Shutdown(context.Background())
	<-s.served //nolint:errcheck // only its end matters
}

// restart puts another server in the place of this one.
func (s *exampleServer) restart() {
	s.leave()
	s.start()
}

func (s *exampleServer) stop() {
	s.leave()
	_ = os.RemoveAll(s.folder)
}

func writeCertificate(folder string) (certificate, key string) {
	private, err := ecdsa.GenerateKey(elliptic.P256(), rand.Reader)
	check(err)
	template := &x509.Certificate{
		SerialNumber: big.NewInt(1), NotBefore: time.Now().Add(-time.Hour), NotAfter: time.Now().Add(time.Hour),
		DNSNames: []string{"localhost"}, IPAddresses: []net.IP{net.IPv4(127, 0, 0, 1)},
		IsCA: true, BasicConstraintsValid: true, KeyUsage: x509.KeyUsageCertSign | x509.KeyUsageDigitalSignature,
		ExtKeyUsage: []x509.ExtKeyUsage{x509.ExtKeyUsageServerAuth, x509.ExtKeyUsageClientAuth},
	}
	der, err := x509.CreateCertificate(rand.Reader, template, template, &private.PublicKey, private)
	check(err)
	raw, err := x509.MarshalPKCS8PrivateKey(private)
	check(err)
	certificate, key = filepath.Join(folder, "tls.crt"), filepath.Join(folder, "tls.key")
	check(os.WriteFile(certificate, pem.EncodeToMemory(&pem.Block{Type: "CERTIFICATE", Bytes: der}), 0o600))
	check(os.WriteFile(key, pem.EncodeToMemory(&pem.Block{Type: "PRIVATE KEY", Bytes: raw}), 0o600))
	return certificate, key
}

// check ends an example whose surroundings fail.
func check(err error) {
	if err != nil {
		panic(err)
	}
}
