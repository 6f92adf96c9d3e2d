package main

import (
	"slices"
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
		Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{Given: pairSelection()}},
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
