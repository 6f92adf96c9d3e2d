package main

import (
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
	"path/filepath"
	"slices"
	"sync"
	"sync/atomic"
	"testing"
	"time"

	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/status"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// BenchmarkGateBesideBulk compares the latency of verdicts, over TLS at a tenth of the
// load, alone and while callers of every kind of bulk work keep the other listener busy.
// The two alternate, so that both see the same machine.
func BenchmarkGateBesideBulk(b *testing.B) {
	const rounds = 4
	certificate, key := selfSigned(b)
	g := startGate(b, "--certificate-file", certificate, "--key-file", key)
	client := func(where string) *kinegate.Client {
		c, err := kinegate.Dial(where, kinegate.Options{TLS: true, CAFile: certificate, ServerName: "localhost"})
		if err != nil {
			b.Fatal(err)
		}
		b.Cleanup(func() { _ = c.Close() })
		return c
	}
	block := sixPhotons(perLatencyBlock)
	stream := openGate(b, client(g.where["gate"]))
	general := client(g.where["general"])
	for b.Loop() {
		rate := saturation(b, stream, block) / 10
		var alone, beside []time.Duration
		for range rounds {
			alone = append(alone, openLoop(b, stream, block, rate, int(rate))...)
			calm := saturate(b, general)
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

// saturate keeps the general listener busy with whole blocks, simulated events, searches
// for channels and curves until calm is called, which fails if a kind was never answered.
func saturate(b *testing.B, general *kinegate.Client) (calm func()) {
	b.Helper()
	ctx, cancel := context.WithCancel(b.Context())
	var busy sync.WaitGroup
	work := bulkWork(general)
	answered := make([]atomic.Int64, len(work))
	for i, do := range work {
		busy.Go(func() {
			for ctx.Err() == nil {
				switch err := do(ctx); {
				case err == nil:
					answered[i].Add(1)
				case ctx.Err() == nil && status.Code(err) != codes.Unavailable:
					b.Errorf("bulk work %d: %v", i, err)
					return
				}
			}
		})
	}
	return func() {
		cancel()
		busy.Wait()
		for i := range answered {
			if answered[i].Load() == 0 {
				b.Logf("bulk work %d was never answered", i)
			}
		}
	}
}

// bulkWork is one call of each kind of work that takes long, of the first one twice.
func bulkWork(general *kinegate.Client) []func(context.Context) error {
	bulk := message(sixPhotons(4096))
	judge := func(ctx context.Context) error {
		_, err := general.Selections.JudgeBlock(ctx, &kinegatev1.JudgeBlockRequest{
			Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Inline{Inline: pairSelection()}},
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
