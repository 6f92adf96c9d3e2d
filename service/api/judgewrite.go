package api

import (
	"strings"
	"time"

	"google.golang.org/grpc/mem"
	"google.golang.org/protobuf/proto"

	"example.org/kinegate/kinematics/event"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// reply is a verdict on its way to the caller, encoded.
type reply struct {
	data     mem.BufferSlice
	sequence int64
	bytes    int64 // of the block answered
	receipt  time.Time
	// taken is the selection that took over before this verdict; nil where none did.
	taken *kinegatev1.SelectionOutline

	rejected bool
	accepted int
	statuses [event.BudgetUsed + 1]int
}

// newReply encodes a verdict on the block p and counts what it says.
func newReply(verdict *kinegatev1.VerdictBlock, p pendingBlock) (*reply, error) {
	data, err := EncodeMessage(&kinegatev1.JudgeResponse{Frame: &kinegatev1.JudgeResponse_Verdict{Verdict: verdict}})
	if err != nil {
		return nil, err
	}
	r := &reply{
		data: data, sequence: verdict.GetSequence(), bytes: p.bytes, receipt: p.receipt,
		rejected: verdict.GetRejected() != nil, accepted: onesCount(verdict.GetGate()),
	}
	for _, status := range verdict.GetStatuses() {
		if int(status) < len(r.statuses) {
			r.statuses[status]++
		}
	}
	return r, nil
}

// EncodeMessage encodes a message into a buffer of the pool.
func EncodeMessage(m proto.Message) (mem.BufferSlice, error) {
	size := proto.Size(m)
	// The size was computed above and the message does not change in between.
	options := proto.MarshalOptions{UseCachedSize: true}
	if mem.IsBelowBufferPoolingThreshold(size) {
		data, err := options.Marshal(m)
		return mem.BufferSlice{mem.SliceBuffer(data)}, err //nolint:wrapcheck // the caller names the message
	}
	data := Buffers.Get(size)
	if _, err := options.MarshalAppend((*data)[:0], m); err != nil {
		Buffers.Put(data)
		return nil, err //nolint:wrapcheck // the caller names the message
	}
	return mem.BufferSlice{mem.NewBuffer(data, Buffers)}, nil
}

// write sends replies, and a heartbeat after a second of silence, until there are no
// more. When the stream is to leave it says so, stops the reading, and goes on until
// everything that was read is answered.
func (j *judgeStream) write() error {
	beat := time.NewTimer(heartbeatInterval)
	defer beat.Stop()
	leave := j.leave
	for {
		var response *kinegatev1.JudgeResponse
		select {
		case r, more := <-j.replies:
			if !more {
				return nil
			}
			if r.taken != nil {
				if err := j.send(&kinegatev1.JudgeResponse{Frame: &kinegatev1.JudgeResponse_Taken{Taken: r.taken}}); err != nil {
					return err
				}
			}
			// The credit goes back first: the caller may use it before Send returns. The
			// block's memory is free already.
			j.ledger.answer(r.sequence, r.bytes)
			if err := j.send(&Encoded{Data: r.data}); err != nil {
				return err
			}
			j.observe(r)
			beat.Reset(heartbeatInterval)
			continue
		case <-beat.C:
			received, answered, oldest := j.ledger.pulse(j.service.deps.Now())
			response = &kinegatev1.JudgeResponse{Frame: &kinegatev1.JudgeResponse_Heartbeat{Heartbeat: &kinegatev1.Heartbeat{
				ReceivedSequence: received, AnsweredSequence: answered, OldestPendingS: oldest.Seconds(),
			}}}
		case reason := <-leave:
			leave, j.drained = nil, true
			close(j.stop)
			_, answered, _ := j.ledger.pulse(j.service.deps.Now())
			response = &kinegatev1.JudgeResponse{Frame: &kinegatev1.JudgeResponse_Draining{Draining: &kinegatev1.Draining{
				AnsweredSequence: answered, GraceS: j.service.deps.Drain.Grace.Seconds(), Reason: reason,
			}}}
		}
		if err := j.send(response); err != nil {
			return err
		}
		beat.Reset(heartbeatInterval)
	}
}

// send sends a frame in sight of watch.
func (j *judgeStream) send(m any) error {
	j.sending.Store(max(1, int64(time.Since(j.start))))
	err := j.stream.SendMsg(m)
	j.sending.Store(0)
	return err
}

// observe counts a reply that was sent.
func (j *judgeStream) observe(r *reply) {
	observer := j.service.deps.Observer
	observer.BlockAnswered(j.service.deps.Now().Sub(r.receipt))
	if r.rejected {
		observer.EventsJudged("block_rejected", 0)
		return
	}
	observer.EventsJudged("accepted", r.accepted)
	observer.EventsJudged("rejected", r.statuses[event.Good]+r.statuses[event.BudgetUsed]-r.accepted)
	for status := event.NonFinite; status <= event.Expired; status++ {
		if r.statuses[status] > 0 {
			observer.EventsJudged(statusLabel(status), r.statuses[status])
		}
	}
}

// statusLabel is the name of a status in the contract, in the form of a label.
func statusLabel(s event.Status) string {
	name := kinegatev1.EventStatus(s).String()
	return strings.ToLower(strings.TrimPrefix(name, "EVENT_STATUS_"))
}
