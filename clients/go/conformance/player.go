package conformance

import (
	"context"
	"errors"
	"fmt"
	"io"

	"google.golang.org/protobuf/encoding/protojson"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Play plays the client's side of a script, frame by frame, against a server and returns
// how the server's frames differ from those of the script.
func (s *Script) Play(ctx context.Context, server kinegatev1.SelectionServiceClient) error {
	digest := ""
	for number, steps := range s.Connections {
		stream, err := server.Judge(ctx)
		if err != nil {
			return err
		}
		for i := range steps {
			if err := playStep(stream, &steps[i], s, &digest); err != nil {
				return &BreachError{steps[i].Rule, fmt.Sprintf("connection %d, step %d: %v", number, i, err)}
			}
		}
	}
	return nil
}

type judgeClient interface {
	Send(request *kinegatev1.JudgeRequest) error
	Recv() (*kinegatev1.JudgeResponse, error)
	CloseSend() error
}

// pinned stands for the digest of the last opening.
const pinned = "pinned"

func playStep(stream judgeClient, step *Step, s *Script, digest *string) error {
	switch {
	case step.Client != nil:
		request, err := s.request(step)
		if err != nil {
			return err
		}
		if named := request.GetOpen().GetSelection().GetNamed(); named.GetSelectionDigest() == pinned {
			named.SelectionDigest = *digest
		}
		// The end of the rpc shows at the next frame of the server.
		if err := stream.Send(request); err != nil && !errors.Is(err, io.EOF) {
			return err
		}
		return nil
	case step.Finish:
		return stream.CloseSend()
	case step.Server != nil:
		response, err := nextFrame(stream)
		if err != nil {
			return err
		}
		if opened := response.GetOpened(); opened != nil {
			*digest = opened.GetSelection().GetSelectionDigest()
		}
		came, err := form(response)
		if err != nil {
			return err
		}
		return compare(step.Server, came, DefaultTolerance)
	case step.Failure != nil:
		_, err := nextFrame(stream)
		return step.Failure.check(err)
	case step.End == "ok":
		if _, err := nextFrame(stream); !errors.Is(err, io.EOF) {
			return fmt.Errorf("the stream ended with %w", err)
		}
		return nil
	}
	return errors.New("the step is none for a server")
}

// nextFrame passes over heartbeats.
func nextFrame(stream judgeClient) (*kinegatev1.JudgeResponse, error) {
	for {
		response, err := stream.Recv()
		if err != nil || response.GetHeartbeat() == nil {
			return response, err
		}
	}
}

// request completes a frame of the client: a block is that of its sequence, an opening
// that of the script.
func (s *Script) request(step *Step) (*kinegatev1.JudgeRequest, error) {
	request := &kinegatev1.JudgeRequest{}
	if err := protojson.Unmarshal(step.Client, request); err != nil {
		return nil, err
	}
	blocks, err := s.Events()
	if err != nil {
		return nil, err
	}
	if b := request.GetBlock(); b != nil {
		sequence := b.GetSequence()
		i := min(max(sequence-s.FirstSequence, 0), int64(len(blocks)-1))
		request.Frame = &kinegatev1.JudgeRequest_Block{Block: blocks[i]}
		request.GetBlock().Sequence = sequence
	}
	return request, nil
}
