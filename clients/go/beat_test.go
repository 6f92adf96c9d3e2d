package kinegate_test

import (
	"net"
	"path/filepath"
	"testing"

	"google.golang.org/grpc"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// slowServer answers a block only after two heartbeats, and notes the age that each names.
type slowServer struct {
	kinegatev1.UnimplementedSelectionServiceServer

	ages chan float64
}

func (s *slowServer) Judge(stream grpc.BidiStreamingServer[kinegatev1.JudgeRequest, kinegatev1.JudgeResponse]) error {
	if _, err := stream.Recv(); err != nil {
		return err
	}
	opened := &kinegatev1.JudgeOpened{Credit: &kinegatev1.Credit{BlockCount: 1, ByteCount: 1 << 20}}
	if err := stream.Send(&kinegatev1.JudgeResponse{Frame: &kinegatev1.JudgeResponse_Opened{Opened: opened}}); err != nil {
		return err
	}
	for beats := 0; ; {
		request, err := stream.Recv()
		if err != nil {
			return err
		}
		if beat := request.GetHeartbeat(); beat != nil {
			s.ages <- beat.GetOldestPendingS()
			beats++
		}
		if beats == 2 {
			verdict := &kinegatev1.VerdictBlock{}
			if err := stream.Send(&kinegatev1.JudgeResponse{Frame: &kinegatev1.JudgeResponse_Verdict{Verdict: verdict}}); err != nil {
				return err
			}
		}
	}
}

// TestHeartbeatsNameTheAge: a heartbeat says for how long the oldest block has waited, and 0 once it
// has its verdict.
func TestHeartbeatsNameTheAge(t *testing.T) {
	t.Parallel()
	path := filepath.Join(t.TempDir(), "s")
	listener, err := (&net.ListenConfig{}).Listen(t.Context(), "unix", path)
	if err != nil {
		t.Fatal(err)
	}
	const beats = 3
	slow := &slowServer{ages: make(chan float64, beats)}
	server := grpc.NewServer()
	kinegatev1.RegisterSelectionServiceServer(server, slow)
	go func() { _ = server.Serve(listener) }()
	t.Cleanup(server.Stop)
	client, err := kinegate.Dial("unix:"+path, kinegate.Options{})
	if err != nil {
		t.Fatal(err)
	}
	defer client.Close() //nolint:errcheck // it has nothing else to do
	const patience = 60e9
	stream, err := client.Judge(t.Context(), &kinegatev1.JudgeOpen{}, kinegate.JudgeOptions{Silence: patience, Stuck: patience})
	if err != nil {
		t.Fatal(err)
	}
	defer stream.Close()
	if err := stream.Send(&kinegatev1.EventBlock{}); err != nil {
		t.Fatal(err)
	}
	if _, err := stream.Recv(); err != nil {
		t.Fatal(err)
	}
	first, second, after := <-slow.ages, <-slow.ages, <-slow.ages
	// A beat comes a second after the last frame, or later on a busy machine.
	if first < 0.99 || second < first+0.99 || after != 0 {
		t.Errorf("ages of %v s, %v s and after the verdict %v s", first, second, after)
	}
}
