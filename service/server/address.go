package server

import (
	"net"
	"net/netip"
	"strconv"
	"strings"

	"example.org/kinegate/kinematics/fault"
)

// address is where a listener listens.
type address struct {
	network, where string
}

// unixNetwork is the network of unix sockets.
const unixNetwork = "unix"

// addressForm says how an address is written.
const addressForm = "host:port, such as 127.0.0.1:8470 or [::1]:0, or unix:path"

// parseAddress reads an address. The host may be empty, which is every interface,
// and the port 0, which is any free one.
func parseAddress(text string) (address, *fault.Error) {
	if path, ok := strings.CutPrefix(text, "unix:"); ok {
		if path == "" {
			return address{}, fault.New(fault.Invalid, "", text, addressForm)
		}
		return address{unixNetwork, path}, nil
	}
	_, port, err := net.SplitHostPort(text)
	if err != nil {
		return address{}, fault.New(fault.Invalid, "", text, addressForm)
	}
	if _, err := strconv.ParseUint(port, 10, 16); err != nil {
		return address{}, fault.New(fault.Invalid, "", text, addressForm)
	}
	return address{"tcp", text}, nil
}

// local reports whether only this machine can reach the address. A name other than
// localhost is not: what it resolves to can change.
func (a address) local() bool {
	if a.network == unixNetwork {
		return true
	}
	host, _, err := net.SplitHostPort(a.where)
	if err != nil {
		return false
	}
	if host == "localhost" {
		return true
	}
	ip, err := netip.ParseAddr(host)
	return err == nil && ip.Unmap().IsLoopback()
}

// fixed reports whether two listeners cannot share the address.
func (a address) fixed() bool {
	return a.network == unixNetwork || !strings.HasSuffix(a.where, ":0")
}
