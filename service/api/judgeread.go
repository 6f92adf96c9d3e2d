package api

import (
	"context"
	"errors"
	"io"
	"time"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// frame is what was received.
type frame struct {
	borrowed *Borrowed
	request  *kinegatev1.JudgeRequest
	err      error
}

// receive hands frames on until the stream or the context ends.
func (j *judgeStream) receive(ctx context.Context, frames chan<- frame) {
	defer close(frames)
	for {
		request := &kinegatev1.JudgeRequest{}
		borrowed := &Borrowed{Message: request}
		err := Contain(func() error { return j.stream.RecvMsg(borrowed) })
		select {
		case frames <- frame{borrowed, request, err}:
		case <-ctx.Done():
			borrowed.Release()
			return
		}
		if err != nil {
			return
		}
	}
}

// read takes frames until the caller ends, breaks the protocol, or stop is closed. It
// always closes pending, after the last block that will be answered.
func (j *judgeStream) read(ctx context.Context) error {
	frames := make(chan frame)
	go j.receive(ctx, frames)
	defer close(j.pending)
	limit := j.service.deps.StreamIdle
	idle := time.NewTimer(limit)
	defer idle.Stop()
	for {
		select {
		case f := <-frames:
			if errors.Is(f.err, io.EOF) {
				return nil
			}
			if f.err != nil {
				return f.err
			}
			idle.Reset(limit)
			if err := j.accept(f); err != nil {
				return err
			}
		case <-idle.C:
			return Refuse(StreamIdle, "no block and no heartbeat for "+limit.String())
		case <-j.stop:
			return nil
		case <-ctx.Done():
			return ctx.Err()
		}
	}
}

// accept books a block and hands it on; the channel has room for the whole credit.
func (j *judgeStream) accept(f frame) error {
	switch x := f.request.GetFrame().(type) {
	case *kinegatev1.JudgeRequest_Block:
		receipt := j.service.deps.Now()
		bytes := blockBytes(x.Block)
		if err := j.ledger.use(x.Block.GetSequence(), bytes, receipt); err != nil {
			f.borrowed.Release()
			return err
		}
		j.pending <- pendingBlock{frame: f.borrowed, block: x.Block, bytes: bytes, receipt: receipt}
		return nil
	case *kinegatev1.JudgeRequest_Heartbeat:
		f.borrowed.Release()
		return nil
	case *kinegatev1.JudgeRequest_Open:
		return Refuse(StreamProtocolBroken, "the stream is open already")
	}
	return Refuse(StreamProtocolBroken, "a frame must be a block or a heartbeat")
}
