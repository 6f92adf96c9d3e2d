package server

import (
	"context"
	"errors"
	"net"
	"os"
	"path/filepath"
	"runtime"
	"strconv"
	"testing"
	"unsafe"

	"golang.org/x/sys/unix"
	"google.golang.org/grpc"
	"google.golang.org/grpc/credentials/insecure"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

// user is a user of the machine with the groups it is in, the first its own.
type user struct {
	id     uint32
	groups []uint32
}

// does runs f as this user. The kernel keeps users by thread: the one that changed its user
// runs nothing else and ends with its goroutine.
func (u user) does(f func() error) error {
	done := make(chan error)
	go func() {
		runtime.LockOSThread()
		own := uintptr(u.groups[0])
		for _, call := range [][4]uintptr{
			{unix.SYS_SETGROUPS, uintptr(len(u.groups)), uintptr(unsafe.Pointer(&u.groups[0]))}, //nolint:gosec // the kernel reads it
			{unix.SYS_SETRESGID, own, own, own},
			{unix.SYS_SETRESUID, uintptr(u.id), uintptr(u.id), uintptr(u.id)},
		} {
			if _, _, e := unix.RawSyscall(call[0], call[1], call[2], call[3]); e != 0 {
				done <- e
				return
			}
		}
		done <- f()
	}()
	return <-done
}

// dials connects to a socket as this user.
func (u user) dials(path string) (conn net.Conn, err error) {
	err = u.does(func() error {
		conn, err = net.Dial("unix", path)
		return err
	})
	return conn, err
}

// TestUsersOfSockets: the members of the group of the server's process may call through its
// socket and have quotas of their own, other users may not.
func TestUsersOfSockets(t *testing.T) {
	if os.Getuid() != 0 {
		t.Skip("only root can be several users; .ci/run is")
	}
	const callers = 64000
	owner, outsider := user{64001, []uint32{callers}}, user{64004, []uint32{64004}}
	members := []user{{64002, []uint32{64002, callers}}, {64003, []uint32{64003, callers}}}
	folder, err := os.MkdirTemp("", "sockets") //nolint:usetesting // that folder is closed to other users
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = os.RemoveAll(folder) })
	err = errors.Join(os.Chown(folder, int(owner.id), callers), os.Chmod(folder, 0o755)) //nolint:gosec // the socket decides
	if err != nil {
		t.Fatal(err)
	}
	path := filepath.Join(folder, "general.sock")
	r := start(t, func(o *Options, d *Deps) {
		onSockets(o, d)
		o.GeneralAddress, o.CallerCalls = "unix:"+path, 1
		d.Listen = func(ctx context.Context, network, where string) (l net.Listener, err error) {
			err = owner.does(func() error {
				l, err = listenOS(ctx, network, where)
				return err
			})
			return l, err
		}
	})

	if _, err := outsider.dials(path); !errors.Is(err, os.ErrPermission) {
		t.Errorf("who is not in the group connects: %v", err)
	}
	for i, m := range members { // each keeps a call open
		conn, err := grpc.NewClient("passthrough:///"+path, grpc.WithTransportCredentials(insecure.NewCredentials()),
			grpc.WithContextDialer(func(context.Context, string) (net.Conn, error) { return m.dials(path) }))
		if err != nil {
			t.Fatal(err)
		}
		defer func() { _ = conn.Close() }()
		if _, err := grpc.NewClientStream(t.Context(), &grpc.StreamDesc{ClientStreams: true}, conn,
			kinegatev1.InfoService_GetInfo_FullMethodName); err != nil {
			t.Fatalf("user %d of the group: %v", m.id, err)
		}
		eventually(t, "a call of each", func() bool { return r.metric(t, "rpc_server_calls_in_flight") == float64(i+1) })
		_, err = kinegatev1.NewInfoServiceClient(conn).GetInfo(t.Context(), &kinegatev1.GetInfoRequest{})
		if got := wantReason(t, err, api.QuotaExceeded); got["caller"] != "user "+strconv.Itoa(int(m.id)) {
			t.Errorf("metadata %v", got)
		}
	}
}
