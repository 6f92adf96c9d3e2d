package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"time"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// batch is a block with what its sender wants to know again at its verdict.
type batch[T any] struct {
	block *kinegatev1.EventBlock
	// events are the sender's own notes, one per event.
	events []T
	sent   time.Time
}

// rejectedBlock is a block that the server refused to judge for what is in it.
type rejectedBlock struct {
	*kinegatev1.Rejection

	sequence int64
}

func (r *rejectedBlock) Error() string {
	return fmt.Sprintf("block %d was rejected: %s: %s", r.sequence, r.GetReason(), r.GetMessage())
}

// pump sends batches through a judge stream until next returns io.EOF, and hands
// each with its verdicts to handle, in order. Sending and handling run side by side.
func pump[T any](
	ctx context.Context, client *kinegate.Client, open *kinegatev1.JudgeOpen,
	next func() (*batch[T], error), handle func(*batch[T], *kinegate.Verdicts) error,
) error {
	ctx, cancel := context.WithCancel(ctx)
	defer cancel()
	stream, err := client.Judge(ctx, open, kinegate.JudgeOptions{})
	if err != nil {
		return err
	}
	defer stream.Close()
	// Blocks beyond the credit wait in Send, so that this much is ever on its way.
	flying := make(chan *batch[T], stream.Opened.GetCredit().GetBlockCount()+1)
	sent := make(chan error, 1)
	go func() {
		defer close(flying)
		sent <- sendAll(ctx, stream, next, flying)
	}()
	for b := range flying {
		block, err := stream.Recv()
		if err != nil {
			return errors.Join(senderError(cancel, sent), err)
		}
		if r := block.GetRejected(); r != nil {
			return &rejectedBlock{Rejection: r, sequence: block.GetSequence()}
		}
		verdicts, err := kinegate.ReadVerdicts(block)
		if err != nil {
			return err
		}
		if err := handle(b, verdicts); err != nil {
			return err
		}
	}
	return <-sent
}

// senderError is what stopped the sender before the stream ended, if anything did.
func senderError(cancel func(), sent <-chan error) error {
	cancel()
	if err := <-sent; !errors.Is(err, context.Canceled) {
		return err
	}
	return nil
}

func sendAll[T any](ctx context.Context, stream *kinegate.JudgeStream, next func() (*batch[T], error), flying chan<- *batch[T]) error {
	for {
		b, err := next()
		if errors.Is(err, io.EOF) {
			return stream.CloseSend()
		}
		if err != nil {
			return err
		}
		b.sent = time.Now()
		select {
		case flying <- b:
		case <-ctx.Done():
			return ctx.Err()
		}
		if err := stream.Send(b.block); err != nil {
			return err
		}
	}
}
