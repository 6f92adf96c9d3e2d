package server

import (
	"net"
	"strconv"
	"syscall"
)

// peerUser is the number of the user who connected through a unix socket, as the kernel
// tells it; empty for other connections.
func peerUser(conn net.Conn) string {
	socket, ok := conn.(*net.UnixConn)
	if !ok {
		return ""
	}
	raw, err := socket.SyscallConn()
	if err != nil {
		return ""
	}
	user := ""
	err = raw.Control(func(descriptor uintptr) {
		peer, err := syscall.GetsockoptUcred(int(descriptor), syscall.SOL_SOCKET, syscall.SO_PEERCRED)
		if err == nil {
			user = strconv.FormatUint(uint64(peer.Uid), 10)
		}
	})
	if err != nil {
		return ""
	}
	return user
}
