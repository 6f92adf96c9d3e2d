package main

import (
	"bufio"
	"context"
	"crypto/ecdsa"
	"crypto/elliptic"
	"crypto/rand"
	"crypto/x509"
	"crypto/x509/pkix"
	"encoding/pem"
	"errors"
	"io"
	"math/big"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"sync"
	"sync/atomic"
	"syscall"
	"testing"
	"time"

	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/status"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// BenchmarkGateBesideBulk compares the latency of verdicts, over TLS at a tenth of the
// load, alone and while callers of every kind of bulk work keep the other listener busy.
// The two alternate, so that both see the same machine. The callers are a process of their
// own, which gives way to the others: as a rule they are other machines.
func BenchmarkGateBesideBulk(b *testing.B) {
	const rounds = 4
	certificate, key := selfSigned(b)
	g := startGate(b, "--certificate-file", certificate, "--key-file", key)
	block := sixPhotons(perLatencyBlock)
	stream := openGate(b, secured(b, g.where["gate"], certificate))
	for b.Loop() {
		rate := saturation(b, stream, block) / 10
		var alone, beside []time.Duration
		for range rounds {
			alone = append(alone, openLoop(b, stream, block, rate, int(rate))...)
			calm := saturate(b, g.where["general"], certificate)
			beside = append(beside, openLoop(b, stream, block, rate, int(rate))...)
			calm()
		}
		slices.Sort(alone)
		slices.Sort(beside)
		b.ReportMetric(at(alone, 0.99), "us-p99-alone")
		b.ReportMetric(at(beside, 0.99), "us-p99-beside")
		b.ReportMetric(at(alone, 0.999), "us-p99.9-alone")
		b.ReportMetric(at(beside, 0.999), "us-p99.9-beside")
		b.ReportMetric(at(beside, 0.99)/at(alone, 0.99), "x-p99")
	}
}

// secured is a client over TLS of a server with its own certificate.
func secured(t testing.TB, where, certificate string) *kinegate.Client {
	t.Helper()
	c, err := kinegate.Dial(where, kinegate.Options{TLS: true, CAFile: certificate, ServerName: "localhost"})
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = c.Close() })
	return c
}

// Variables that make a process of the tests the callers.
const (
	bulkAddress     = "BULK_ADDRESS"
	bulkCertificate = "BULK_CERTIFICATE"
)

// saturate starts callers that keep a listener busy until calm is called, and returns when
// each kind of work has been answered once.
func saturate(b *testing.B, where, certificate string) (calm func()) {
	b.Helper()
	self, err := os.Executable()
	if err != nil {
		b.Fatal(err)
	}
	callers := exec.CommandContext(b.Context(), self, "-test.run", "^TestBulkCallers$") //nolint:gosec // this very program
	callers.Env = append(os.Environ(), bulkAddress+"="+where, bulkCertificate+"="+certificate)
	out, err := callers.StdoutPipe()
	if err != nil {
		b.Fatal(err)
	}
	if err := callers.Start(); err != nil {
		b.Fatal(err)
	}
	const low = 10
	_ = syscall.Setpriority(syscall.PRIO_PROCESS, callers.Process.Pid, low) // else they are in the way
	lines := bufio.NewScanner(out)
	busy := false
	for !busy && lines.Scan() {
		busy = lines.Text() == "busy"
	}
	if !busy {
		b.Fatalf("the callers ended with %q: %v", lines.Text(), lines.Err())
	}
	return func() {
		_ = callers.Process.Kill()
		_ = callers.Wait() // it was killed
	}
}

// TestBulkCallers is the body of the callers' process, and does nothing by itself.
func TestBulkCallers(t *testing.T) {
	where := os.Getenv(bulkAddress)
	if where == "" {
		t.Skip("a part of BenchmarkGateBesideBulk")
	}
	general := secured(t, where, os.Getenv(bulkCertificate))
	var answered, all sync.WaitGroup
	for i, do := range bulkWork(general) {
		answered.Add(1)
		all.Go(func() {
			for first := sync.OnceFunc(answered.Done); ; {
				switch err := do(t.Context()); {
				case err == nil:
					first()
				case status.Code(err) != codes.Unavailable:
					t.Errorf("bulk work %d: %v", i, err)
					return
				}
			}
		})
	}
	answered.Wait()
	_, _ = os.Stdout.WriteString("busy\n") // the reader notices a loss
	all.Wait()
}

// bulkWork is one call of each kind of work that takes long, of the first one twice.
func bulkWork(general *kinegate.Client) []func(context.Context) error {
	bulk := message(sixPhotons(4096))
	judge := func(ctx context.Context) error {
		_, err := general.Selections.JudgeBlock(ctx, &kinegatev1.JudgeBlockRequest{
			Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{Given: pairSelection()}},
			Block:     bulk,
		})
		return err
	}
	generate := func(ctx context.Context) error {
		stream, err := general.Generation.GenerateEvents(ctx, &kinegatev1.GenerateEventsRequest{
			Generation: omegaGeneration(nil), EventCount: 20000,
		})
		for err == nil {
			_, err = stream.Recv()
		}
		if errors.Is(err, io.EOF) {
			return nil
		}
		return err
	}
	var next atomic.Int64 // the last search is remembered, so that each is another one
	search := func(ctx context.Context) error {
		_, err := general.Reactions.ListOpenChannels(ctx, &kinegatev1.ListOpenChannelsRequest{
			InitialParticles: []string{"p", "p"}, MinBodyCount: 2, MaxBodyCount: 5, PageSize: 10,
			InitialState: &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_SqrtSGev{SqrtSGev: 4 + float64(next.Add(1)%1000)/1000}},
		})
		return err
	}
	energies := make([]float64, 1000)
	for i := range energies {
		energies[i] = 1e5 * float64(1+i)
	}
	curve := func(ctx context.Context) error {
		_, err := general.Photons.DescribePhotonField(ctx, &kinegatev1.DescribePhotonFieldRequest{
			Particle: "e-", PhotonEnergiesGev: energies, DistanceM: 1e22,
			Field: &kinegatev1.DescribePhotonFieldRequest_BlackBody{BlackBody: &kinegatev1.BlackBodyField{TemperatureK: 2.7255}},
		})
		return err
	}
	return []func(context.Context) error{judge, judge, generate, search, curve}
}

// selfSigned writes a certificate for localhost and its key.
func selfSigned(t testing.TB) (certificate, key string) {
	t.Helper()
	private, err := ecdsa.GenerateKey(elliptic.P256(), rand.Reader)
	if err != nil {
		t.Fatal(err)
	}
	template := &x509.Certificate{
		SerialNumber: big.NewInt(1), Subject: pkix.Name{CommonName: "localhost"}, DNSNames: []string{"localhost"},
		NotBefore: time.Now().Add(-time.Hour), NotAfter: time.Now().Add(time.Hour),
		IsCA: true, BasicConstraintsValid: true,
	}
	der, err := x509.CreateCertificate(rand.Reader, template, template, &private.PublicKey, private)
	if err != nil {
		t.Fatal(err)
	}
	encoded, err := x509.MarshalECPrivateKey(private)
	if err != nil {
		t.Fatal(err)
	}
	folder := t.TempDir()
	write := func(name, kind string, data []byte) string {
		path := filepath.Join(folder, name)
		if err := os.WriteFile(path, pem.EncodeToMemory(&pem.Block{Type: kind, Bytes: data}), 0o600); err != nil {
			t.Fatal(err)
		}
		return path
	}
	return write("certificate.pem", "CERTIFICATE", der), write("key.pem", "EC PRIVATE KEY", encoded)
}
