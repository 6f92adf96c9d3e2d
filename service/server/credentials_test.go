package server

import (
	"crypto/ecdsa"
	"crypto/elliptic"
	"crypto/rand"
	"crypto/tls"
	"crypto/x509"
	"crypto/x509/pkix"
	"encoding/pem"
	"math/big"
	"net"
	"net/url"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/credentials"
	"google.golang.org/grpc/credentials/insecure"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// authority signs certificates for tests.
type authority struct {
	certificate *x509.Certificate
	key         *ecdsa.PrivateKey
	pem         []byte
	serial      int64
}

// newAuthority returns an authority of its own.
func newAuthority(t *testing.T) *authority {
	t.Helper()
	key, err := ecdsa.GenerateKey(elliptic.P256(), rand.Reader)
	if err != nil {
		t.Fatal(err)
	}
	template := &x509.Certificate{
		SerialNumber: big.NewInt(1), Subject: pkix.Name{CommonName: "test authority"},
		NotBefore: time.Now().Add(-time.Hour), NotAfter: time.Now().Add(time.Hour),
		IsCA: true, BasicConstraintsValid: true, KeyUsage: x509.KeyUsageCertSign,
	}
	der, err := x509.CreateCertificate(rand.Reader, template, template, &key.PublicKey, key)
	if err != nil {
		t.Fatal(err)
	}
	certificate, err := x509.ParseCertificate(der)
	if err != nil {
		t.Fatal(err)
	}
	return &authority{certificate, key, encodePEM("CERTIFICATE", der), 1}
}

// issue returns a certificate and key for localhost, or for a caller with a URI, that
// is valid for a while from now.
func (a *authority) issue(t *testing.T, uri string, valid time.Duration) (chain, key []byte) {
	t.Helper()
	k, err := ecdsa.GenerateKey(elliptic.P256(), rand.Reader)
	if err != nil {
		t.Fatal(err)
	}
	a.serial++
	template := &x509.Certificate{
		SerialNumber: big.NewInt(a.serial), NotBefore: time.Now().Add(-time.Hour), NotAfter: time.Now().Add(valid),
		DNSNames: []string{"localhost"}, IPAddresses: []net.IP{net.IPv4(127, 0, 0, 1)},
		ExtKeyUsage: []x509.ExtKeyUsage{x509.ExtKeyUsageServerAuth, x509.ExtKeyUsageClientAuth},
	}
	if uri != "" {
		u, err := url.Parse(uri)
		if err != nil {
			t.Fatal(err)
		}
		template.URIs, template.DNSNames = []*url.URL{u}, nil
	}
	der, err := x509.CreateCertificate(rand.Reader, template, a.certificate, &k.PublicKey, a.key)
	if err != nil {
		t.Fatal(err)
	}
	raw, err := x509.MarshalPKCS8PrivateKey(k)
	if err != nil {
		t.Fatal(err)
	}
	return encodePEM("CERTIFICATE", der), encodePEM("PRIVATE KEY", raw)
}

func encodePEM(kind string, der []byte) []byte {
	return pem.EncodeToMemory(&pem.Block{Type: kind, Bytes: der})
}

// trusting is the client side of TLS with an authority, and a certificate if chain is
// not nil.
func (a *authority) trusting(t *testing.T, chain, key []byte) *tls.Config {
	t.Helper()
	pool := x509.NewCertPool()
	pool.AddCert(a.certificate)
	c := &tls.Config{RootCAs: pool, ServerName: "localhost", MinVersion: tls.VersionTLS12}
	if chain != nil {
		pair, err := tls.X509KeyPair(chain, key)
		if err != nil {
			t.Fatal(err)
		}
		c.Certificates = []tls.Certificate{pair}
	}
	return c
}

// files are the certificate files of a server in a test.
type files struct{ certificate, key, clientCA string }

func (a *authority) files(t *testing.T) files {
	t.Helper()
	folder := t.TempDir()
	f := files{filepath.Join(folder, "tls.crt"), filepath.Join(folder, "tls.key"), filepath.Join(folder, "ca.crt")}
	a.write(t, f)
	return f
}

func (a *authority) write(t *testing.T, f files) {
	t.Helper()
	chain, key := a.issue(t, "", time.Hour)
	writeFile(t, f.certificate, chain)
	writeFile(t, f.key, key)
	writeFile(t, f.clientCA, a.pem)
}

// mutual lets a server serve with the files and ask callers for certificates.
func (f files) mutual(o *Options, _ *Deps) {
	o.CertificateFile, o.KeyFile, o.ClientCAFile = f.certificate, f.key, f.clientCA
}

// onSockets gives a server sockets of the operating system on free loopback ports.
func onSockets(o *Options, d *Deps) {
	d.Listen = nil
	o.GateAddress, o.GeneralAddress = "127.0.0.1:0", "localhost:0"
	o.HealthAddress, o.MetricsAddress = "[::1]:0", "127.0.0.1:0"
	if l, err := net.Listen("tcp", o.HealthAddress); err != nil {
		o.HealthAddress = "127.0.0.1:0" // a machine without IPv6
	} else {
		_ = l.Close()
	}
}

// info calls GetInfo on a socket and returns the call's error.
func info(t *testing.T, target string, creds credentials.TransportCredentials) error {
	t.Helper()
	conn, err := grpc.NewClient(target, grpc.WithTransportCredentials(creds))
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = conn.Close() }()
	_, err = kinegatev1.NewInfoServiceClient(conn).GetInfo(t.Context(), &kinegatev1.GetInfoRequest{})
	return err
}

func TestTLS(t *testing.T) {
	a := newAuthority(t)
	f := a.files(t)
	r := start(t, onSockets, func(o *Options, _ *Deps) { o.CertificateFile, o.KeyFile = f.certificate, f.key })
	for _, name := range []Listener{Gate, General} {
		where := r.Addr(name).String()
		if err := info(t, where, credentials.NewTLS(a.trusting(t, nil, nil))); err != nil {
			t.Errorf("%s: %v", name, err)
		}
		if err := info(t, where, insecure.NewCredentials()); err == nil {
			t.Errorf("%s answers in plaintext", name)
		}
		for version, ok := range map[uint16]bool{tls.VersionTLS12: false, tls.VersionTLS13: true} {
			c := a.trusting(t, nil, nil)
			c.MaxVersion, c.NextProtos = version, []string{"h2"}
			conn, err := tls.Dial("tcp", where, c)
			if (err == nil) != ok {
				t.Errorf("%s with version %x: %v", name, version, err)
			}
			if err == nil {
				if got := conn.ConnectionState().NegotiatedProtocol; got != "h2" {
					t.Errorf("%s negotiates %q", name, got)
				}
				_ = conn.Close()
			}
		}
	}
	if r.metric(t, "kinegate_certificate_expiry_timestamp_seconds", "server") < float64(time.Now().Unix()) {
		t.Error("the expiry is not shown")
	}
}

func TestMutualTLS(t *testing.T) {
	a, stranger := newAuthority(t), newAuthority(t)
	f := a.files(t)
	r := start(t, onSockets, f.mutual)
	where := r.Addr(General).String()
	chain, key := a.issue(t, "spiffe://example.org/trigger", time.Hour)
	if err := info(t, where, credentials.NewTLS(a.trusting(t, chain, key))); err != nil {
		t.Fatal(err)
	}
	eventually(t, "the identity in the log", func() bool { return strings.Contains(r.log.String(), "spiffe://example.org/trigger") })
	if err := info(t, where, credentials.NewTLS(a.trusting(t, nil, nil))); err == nil {
		t.Error("a caller without a certificate is let in")
	}
	other, otherKey := stranger.issue(t, "spiffe://example.org/trigger", time.Hour)
	if err := info(t, where, credentials.NewTLS(a.trusting(t, other, otherKey))); err == nil {
		t.Error("a caller of another authority is let in")
	}
	old, oldKey := a.issue(t, "spiffe://example.org/trigger", -time.Minute)
	if err := info(t, where, credentials.NewTLS(a.trusting(t, old, oldKey))); err == nil {
		t.Error("a caller with an expired certificate is let in")
	}
}

// TestCertificateReload swaps the files: sound ones are taken, bad ones keep the old.
func TestCertificateReload(t *testing.T) {
	a := newAuthority(t)
	f := a.files(t)
	r := start(t, onSockets, func(o *Options, _ *Deps) { o.CertificateFile, o.KeyFile = f.certificate, f.key })
	serial := func() int64 {
		t.Helper()
		conn, err := tls.Dial("tcp", r.Addr(Gate).String(), func() *tls.Config {
			c := a.trusting(t, nil, nil)
			c.NextProtos = []string{"h2"}
			return c
		}())
		if err != nil {
			t.Fatal(err)
		}
		defer func() { _ = conn.Close() }()
		return conn.ConnectionState().PeerCertificates[0].SerialNumber.Int64()
	}
	first := serial()
	if changed, err := r.certificates.reread(); changed || err != nil {
		t.Errorf("the same files: %v %v", changed, err)
	}
	a.write(t, f)
	if changed, err := r.certificates.reread(); !changed || err != nil {
		t.Errorf("new files: %v %v", changed, err)
	}
	second := serial()
	if second == first {
		t.Error("the old certificate is still in use")
	}
	expired, key := a.issue(t, "", -time.Minute)
	for name, bad := range map[string][2][]byte{
		"garbage": {[]byte("x"), []byte("x")}, "expired": {expired, key}, "half": {expired, []byte("x")},
	} {
		writeFile(t, f.certificate, bad[0])
		writeFile(t, f.key, bad[1])
		if changed, err := r.certificates.reread(); changed || err == nil {
			t.Errorf("%s: %v %v", name, changed, err)
		}
		if r.metric(t, "kinegate_certificate_reload_success") != 0 {
			t.Errorf("%s: the metric shows success", name)
		}
		if got := serial(); got != second {
			t.Errorf("%s: serial %d", name, got)
		}
	}
	a.write(t, f)
	if changed, err := r.certificates.reread(); !changed || err != nil || r.metric(t, "kinegate_certificate_reload_success") != 1 {
		t.Errorf("sound files again: %v %v", changed, err)
	}
}

// TestClientAuthorityReload swaps the authority of callers: who was let in before is not
// any more, and the other way round; a bad file keeps the old one.
func TestClientAuthorityReload(t *testing.T) {
	a, next := newAuthority(t), newAuthority(t)
	f := a.files(t)
	r := start(t, onSockets, f.mutual)
	chain, key := a.issue(t, "spiffe://example.org/trigger", time.Hour)
	nextChain, nextKey := next.issue(t, "spiffe://example.org/trigger", time.Hour)
	step := func(what string, old, renewed bool) {
		t.Helper()
		for caller, c := range map[string]struct {
			creds *tls.Config
			in    bool
		}{"old": {a.trusting(t, chain, key), old}, "new": {a.trusting(t, nextChain, nextKey), renewed}} {
			if err := info(t, r.Addr(General).String(), credentials.NewTLS(c.creds)); (err == nil) != c.in {
				t.Errorf("%s: the caller of the %s authority: %v", what, caller, err)
			}
		}
	}
	step("start", true, false)
	for _, c := range []struct {
		what         string
		authorities  []byte
		sound        bool
		old, renewed bool
	}{
		{"both authorities", slices.Concat(a.pem, next.pem), true, true, true},
		{"the new one alone", next.pem, true, false, true},
		{"garbage", []byte("x"), false, false, true},
		{"the old one again", a.pem, true, true, false},
	} {
		writeFile(t, f.clientCA, c.authorities)
		if changed, err := r.certificates.reread(); changed != c.sound || (err == nil) != c.sound {
			t.Errorf("%s: %v %v", c.what, changed, err)
		}
		step(c.what, c.old, c.renewed)
	}
}

func TestBadCertificateFilesRefuseTheStart(t *testing.T) {
	a := newAuthority(t)
	f := a.files(t)
	folder := t.TempDir()
	broken := filepath.Join(folder, "broken")
	writeFile(t, broken, []byte("-----BEGIN CERTIFICATE-----\nAAAA\n-----END CERTIFICATE-----\n"))
	for name, c := range map[string]struct {
		change func(*Options)
		field  string
	}{
		"no file":      {func(o *Options) { o.CertificateFile = filepath.Join(folder, "none") }, "certificate_file"},
		"no key":       {func(o *Options) { o.KeyFile = filepath.Join(folder, "none") }, "key_file"},
		"not a pair":   {func(o *Options) { o.KeyFile = f.clientCA }, "certificate_file"},
		"no authority": {func(o *Options) { o.ClientCAFile = f.key }, "client_ca_file"},
		"broken PEM":   {func(o *Options) { o.ClientCAFile = broken }, "client_ca_file"},
		"a folder":     {func(o *Options) { o.ClientCAFile = folder }, "client_ca_file"},
	} {
		t.Run(name, func(t *testing.T) {
			o := quick()
			o.CertificateFile, o.KeyFile = f.certificate, f.key
			c.change(&o)
			_, err := New(o, Deps{})
			if names := faultNames(err); len(names) != 1 || names[0] != c.field {
				t.Errorf("got %v", err)
			}
		})
	}
}
