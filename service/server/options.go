package server

import (
	"context"
	"net"
	"runtime"
	"time"

	"github.com/prometheus/client_golang/prometheus"
	"github.com/rs/zerolog"

	"example.org/kinegate/service/api"
)

// Options are the settings of a server. Settings describes each of them; start from
// Defaults.
type Options struct {
	GateAddress, GeneralAddress                 string
	HealthAddress, MetricsAddress, DebugAddress string

	CertificateFile, KeyFile, ClientCAFile string
	AccessFile                             string
	UnsafePlaintext                        bool

	MessageLimit, BlockLimit, DecodedLimit, HeaderLimit Bytes
	CreditBlocks                                        int
	CreditLimit, CreditPool, MemoryLimit                Bytes
	Connections, ConnectionStreams                      int
	GateStreams, GeneralStreams                         int
	CallerCalls, WorkSlots                              int
	GateStreamWindow, GateConnectionWindow              Bytes
	GeneralStreamWindow, GeneralConnectionWindow        Bytes

	HandshakeTimeout                                     time.Duration
	ClientPingMinimum, ClientPingAdvice                  time.Duration
	PingInterval, PingTimeout                            time.Duration
	ConnectionIdle, ConnectionAge, ConnectionAgeGrace    time.Duration
	DefaultDeadline, LongestDeadline, StreamIdle         time.Duration
	DrainNotice, DrainTime, StopMargin, TerminationGrace time.Duration

	StallLimit  time.Duration
	BehindProxy bool

	UntilInputEnds bool

	ParticleFiles, SelectionFiles []string
	SelectionFolder               string
	Reflection                    bool
	LogLevel                      string
	LogBurst, LogKeepOneIn        int
}

// Deps is what a server gets from outside. Every part is optional.
type Deps struct {
	// Version is the version of the program.
	Version string
	// Log takes the log lines; nothing is logged without.
	Log zerolog.Logger
	// LogHeld is called for each line of a failed call that is held back as too many.
	LogHeld func()
	// Registry takes the metrics and is what /metrics shows; a new one if nil.
	Registry *prometheus.Registry
	// Listen opens a listener; that of the operating system if nil.
	Listen func(ctx context.Context, network, address string) (net.Listener, error)
	// Settings reads the settings again; nil if they cannot change.
	Settings func() (Options, error)
	// Now tells the time to the judge; the system's clock if nil.
	Now func() time.Time
}

// slots is how much work is done at a time on the general listener: as much as it has
// turns for, since one processor stays free of it. With more, each would only take longer.
func (o *Options) slots() int {
	if o.WorkSlots > 0 {
		return o.WorkSlots
	}
	return max(runtime.GOMAXPROCS(0)-1, 1)
}

// limits are the options in the form the api takes.
func (o *Options) limits() api.Limits {
	l := api.DefaultLimits()
	l.MessageBytes = int(o.MessageLimit)
	l.BlockBytes = int(o.BlockLimit)
	l.DecodedBytes = int(o.DecodedLimit)
	l.CreditBlocks = o.CreditBlocks
	l.CreditBytes = int(o.CreditLimit)
	l.PoolBytes = int(o.CreditPool)
	return l
}
