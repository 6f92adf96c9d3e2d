package history

import (
	"context"
	"errors"
	"fmt"
	"io"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Sample makes events [from, from+count) of a sample, each the same in whatever block it
// comes.
type Sample func(from, count int) *kinegatev1.EventBlock

// LearnSample judges the first events of Photons over one stream, in blocks of a size that
// no test uses, and returns a checker that knows them.
func LearnSample(ctx context.Context, client *kinegate.Client, open *kinegatev1.JudgeOpen, events int) (*Checker, error) {
	return Learn(ctx, client, open, Photons, events)
}

// Learn is LearnSample of any sample.
func Learn(
	ctx context.Context, client *kinegate.Client, open *kinegatev1.JudgeOpen, sample Sample, events int,
) (*Checker, error) {
	const perBlock = 311
	c := New(open)
	stream, err := client.Judge(ctx, open, kinegate.JudgeOptions{})
	if err != nil {
		return nil, err
	}
	defer stream.Close()
	for from := 0; from < events; from += perBlock {
		block := sample(from, min(perBlock, events-from))
		if err := stream.Send(block); err != nil {
			return nil, err
		}
		v, err := stream.Recv()
		if err != nil {
			return nil, err
		}
		if err := c.Learn(block, v); err != nil {
			return nil, err
		}
	}
	return c, nil
}

// Run is a run of the sample through a judge stream.
type Run struct {
	// Client, Open and Options are those of the stream.
	Client  *kinegate.Client
	Open    *kinegatev1.JudgeOpen
	Options kinegate.JudgeOptions
	// Sample is what is sent; Photons if nil.
	Sample Sample
	// Events is how many events to send, PerBlock in a block.
	Events, PerBlock int
	// Before is called before each block, with its first event. Optional.
	Before func(from int)
	// Answered is called for each verdict. Optional.
	Answered func(*kinegatev1.VerdictBlock)
}

// Check does a run and returns everything that was wrong with it.
func (c *Checker) Check(ctx context.Context, r Run) error {
	c.mu.Lock()
	c.opens(r.Open)
	c.mu.Unlock()
	stream, err := r.Client.Judge(ctx, r.Open, r.Options)
	if err != nil {
		return err
	}
	defer stream.Close()
	sent := make(chan error, 1)
	go func() { sent <- c.send(stream, &r) }()
	for {
		v, err := stream.Recv()
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			return fmt.Errorf("the stream ended with %w (Send: %w)", err, <-sent)
		}
		c.Answered(v)
		if r.Answered != nil {
			r.Answered(v)
		}
	}
	faults := []error{<-sent}
	for _, f := range c.Faults(true) {
		faults = append(faults, errors.New(f))
	}
	return errors.Join(faults...)
}

func (c *Checker) send(stream *kinegate.JudgeStream, r *Run) error {
	sample := r.Sample
	if sample == nil {
		sample = Photons
	}
	for from := 0; from < r.Events; from += r.PerBlock {
		if r.Before != nil {
			r.Before(from)
		}
		block := sample(from, min(r.PerBlock, r.Events-from))
		block.Sequence = r.Open.GetFirstSequence() + int64(from/r.PerBlock)
		c.Sent(block)
		if err := stream.Send(block); err != nil {
			return err
		}
	}
	return stream.CloseSend()
}
