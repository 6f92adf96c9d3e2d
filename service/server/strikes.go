package server

import (
	"net"
	"net/netip"
	"sync"
	"time"
)

// A connection may give up so many calls at once, and so many a second for long. Callers
// who lose patience or have seen enough of a stream stay far below; who opens calls only
// to reset them, which costs him less than us, does not.
const (
	mostStrikes      = 200
	strikesPerSecond = 20
)

// fading is a count that is forgotten with time.
type fading struct {
	count float64
	last  time.Time
}

// now is the count after so much is forgotten each second.
func (f *fading) now(perSecond float64, now time.Time) float64 {
	f.count = max(0, f.count-perSecond*max(0, now.Sub(f.last).Seconds()))
	f.last = now
	return f.count
}

// strikes counts the calls that a connection gave up. They are forgotten with time, and
// one for each call that it did not give up.
type strikes struct {
	mu    sync.Mutex
	given fading
	told  bool // that they were too many
	kept  bool // a call was not given up
}

// note notes the end of a call, given up or not, and reports once that it was one too
// many.
func (s *strikes) note(givenUp bool, now time.Time) (tooMany bool) {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.given.now(strikesPerSecond, now)
	if givenUp {
		s.given.count++
	} else {
		s.given.count = max(0, s.given.count-1)
		s.kept = true
	}
	first := s.given.count > mostStrikes && !s.told
	s.told = s.told || first
	return first
}

// weight is what a connection that ends after so much time counts against its address.
func (s *strikes) weight(lasted time.Duration) int {
	s.mu.Lock()
	defer s.mu.Unlock()
	switch {
	case s.told:
		return abuseWeight
	case !s.kept && lasted < fruitless:
		return 1
	}
	return 0
}

// Of the connections from one address so many may come to nothing at once, and so many a
// second for long: they end within moments, with no call that was not given up. One that
// was closed for the calls it gave up counts as several. Checks of balancers stay far
// below; who connects anew as soon as he is thrown out does not.
const (
	fruitless          = 3 * time.Second
	mostFruitless      = 50
	fruitlessPerSecond = 5
	abuseWeight        = 10
	mostAddresses      = 1024
)

// suspects counts connections that came to nothing by their address. An address with too
// many finds no place until they are forgotten, so that a flood which goes on over
// connection after connection costs a few handshakes a second. A nil one counts nothing.
type suspects struct {
	mu    sync.Mutex
	known map[string]*fading
}

// note notes the end of a connection and reports whether its address has too many now.
// They are not counted much further, so that who stops is let in again within seconds.
func (s *suspects) note(address string, weight int, now time.Time) (tooMany bool) {
	if s == nil || address == "" || weight == 0 {
		return false
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	f := s.known[address]
	if f == nil {
		s.makeRoomLocked(now)
		f = &fading{last: now}
		s.known[address] = f
	}
	before := f.now(fruitlessPerSecond, now)
	f.count = min(before+float64(weight), mostFruitless+abuseWeight)
	return before < mostFruitless && f.count >= mostFruitless
}

// makeRoomLocked forgets addresses that owe nothing, and all where there are too many who
// do: the limit of connections still holds those.
func (s *suspects) makeRoomLocked(now time.Time) {
	if len(s.known) < mostAddresses {
		return
	}
	for address, f := range s.known {
		if f.now(fruitlessPerSecond, now) == 0 {
			delete(s.known, address)
		}
	}
	if len(s.known) >= mostAddresses {
		clear(s.known)
	}
}

// refused reports whether an address has too many.
func (s *suspects) refused(address string, now time.Time) bool {
	if s == nil {
		return false
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	f := s.known[address]
	return f != nil && f.now(fruitlessPerSecond, now) >= mostFruitless
}

// whose is what a connection is counted against: the user of a unix socket, an address, or
// the network of 64 bits that one caller has of IPv6; empty where it cannot be told.
func whose(peer net.Addr, user string) string {
	const networkBits = 64
	if user != "" {
		return "user " + user
	}
	from, err := netip.ParseAddrPort(peer.String())
	if err != nil {
		return ""
	}
	ip := from.Addr().Unmap().WithZone("")
	if ip.Is6() {
		network, _ := ip.Prefix(networkBits) // it has as many
		return network.String()
	}
	return ip.String()
}
