package main

import (
	"context"
	"crypto/ecdsa"
	"crypto/elliptic"
	"crypto/rand"
	"crypto/x509"
	"crypto/x509/pkix"
	"encoding/pem"
	"math/big"
	"os"
	"path/filepath"
	"slices"
	"sync"
	"testing"
	"time"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/kinematics/event"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// perLatencyBlock is the size of the blocks whose latency is measured: a hundredth of a
// second of events at 10 kHz.
const perLatencyBlock = 100

// openGate opens a stream with the pair windows.
func openGate(b *testing.B, client *kinegate.Client) *kinegate.JudgeStream {
	b.Helper()
	stream, err := client.Judge(b.Context(), &kinegatev1.JudgeOpen{
		Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Inline{Inline: pairSelection()}},
	}, kinegate.JudgeOptions{Queue: 1024})
	if err != nil {
		b.Fatal(err)
	}
	b.Cleanup(stream.Close)
	return stream
}

// saturation is the rate of blocks that a stream takes at most.
func saturation(b *testing.B, stream *kinegate.JudgeStream, block *event.Block) float64 {
	b.Helper()
	const blocks = 3000
	begun := time.Now()
	go func() {
		for range blocks {
			_ = stream.Send(message(block))
		}
	}()
	for range blocks {
		if _, err := stream.Recv(); err != nil {
			b.Fatal(err)
		}
	}
	return blocks / time.Since(begun).Seconds()
}

// openLoop sends blocks at a rate, whether or not verdicts come, and returns the times
// from when each block was due to its verdict, sorted.
func openLoop(b *testing.B, stream *kinegate.JudgeStream, block *event.Block, rate float64, blocks int) []time.Duration {
	b.Helper()
	period := time.Duration(float64(time.Second) / rate)
	due := make(chan time.Time, blocks)
	go func() {
		begun := time.Now()
		for i := range blocks {
			at := begun.Add(time.Duration(i) * period)
			time.Sleep(time.Until(at))
			due <- at
			_ = stream.Send(message(block))
		}
	}()
	var took []time.Duration
	for range blocks {
		if _, err := stream.Recv(); err != nil {
			b.Fatal(err)
		}
		took = append(took, time.Since(<-due))
	}
	slices.Sort(took)
	return took
}

// at is a quantile of sorted times in microseconds.
func at(took []time.Duration, quantile float64) float64 {
	return float64(took[int(quantile*float64(len(took)-1))]) / float64(time.Microsecond)
}

// BenchmarkJudgeLatency measures the time to the verdict on blocks of 100 six-photon
// events at 20, 50 and 80 % of the rate that the stream takes at most, by a generator
// that does not wait.
func BenchmarkJudgeLatency(b *testing.B) {
	block := sixPhotons(perLatencyBlock)
	stream := openGate(b, startGate(b).client)
	saturation(b, stream, block)
	for _, load := range []struct {
		name string
		part float64
	}{{"load=20", 0.2}, {"load=50", 0.5}, {"load=80", 0.8}} {
		b.Run(load.name, func(b *testing.B) {
			for b.Loop() {
				most := saturation(b, stream, block)
				took := openLoop(b, stream, block, load.part*most, int(2*load.part*most))
				b.ReportMetric(at(took, 0.5), "us-p50")
				b.ReportMetric(at(took, 0.99), "us-p99")
				b.ReportMetric(at(took, 0.999), "us-p99.9")
				b.ReportMetric(load.part*most*perLatencyBlock, "events/s")
			}
		})
	}
}

// BenchmarkGateBesideBulk compares the latency of verdicts, over TLS at a tenth of the
// load, alone and while four callers keep the other listener busy with whole blocks.
func BenchmarkGateBesideBulk(b *testing.B) {
	certificate, key := selfSigned(b)
	g := startGate(b, "--certificate-file", certificate, "--key-file", key)
	options := kinegate.Options{TLS: true, CAFile: certificate, ServerName: "localhost"}
	client := func(where string) *kinegate.Client {
		c, err := kinegate.Dial(where, options)
		if err != nil {
			b.Fatal(err)
		}
		b.Cleanup(func() { _ = c.Close() })
		return c
	}
	block, bulk := sixPhotons(perLatencyBlock), message(sixPhotons(4096))
	stream := openGate(b, client(g.where["gate"]))
	general := client(g.where["general"])
	for b.Loop() {
		rate := saturation(b, stream, block) / 10
		alone := openLoop(b, stream, block, rate, int(3*rate))
		ctx, cancel := context.WithCancel(b.Context())
		var busy sync.WaitGroup
		for range 4 {
			busy.Go(func() {
				for ctx.Err() == nil {
					_, _ = general.Selections.JudgeBlock(ctx, &kinegatev1.JudgeBlockRequest{
						Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Inline{Inline: pairSelection()}},
						Block:     bulk,
					})
				}
			})
		}
		beside := openLoop(b, stream, block, rate, int(3*rate))
		cancel()
		busy.Wait()
		b.ReportMetric(at(alone, 0.99), "us-p99-alone")
		b.ReportMetric(at(beside, 0.99), "us-p99-beside")
		b.ReportMetric(at(beside, 0.999), "us-p99.9-beside")
		b.ReportMetric(at(beside, 0.99)/at(alone, 0.99), "x-p99")
	}
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
