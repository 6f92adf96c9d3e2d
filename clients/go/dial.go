package kinegate

import (
	"crypto/tls"
	"crypto/x509"
	"errors"
	"fmt"
	"os"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/credentials"
	"google.golang.org/grpc/credentials/insecure"
	"google.golang.org/grpc/encoding"
	"google.golang.org/grpc/encoding/proto"
	"google.golang.org/grpc/keepalive"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Options says how to connect. The zero value is plaintext, which servers offer on
// loopback and unix sockets only.
type Options struct {
	// TLS turns transport security on. The other members of this group need it.
	TLS bool
	// CAFile holds the PEM certificates of the authorities to trust; empty means
	// those of the system.
	CAFile string
	// CertFile and KeyFile hold the client's own PEM certificate and key, for
	// servers that ask for one. Both or neither.
	CertFile, KeyFile string
	// ServerName overrides the name that the server's certificate must carry.
	ServerName string
	// DialOptions are passed on to gRPC after all others.
	DialOptions []grpc.DialOption
}

// Limits and times of the transport, equal to the server's own.
const (
	maxMessageBytes  = 4 << 20
	keepaliveTime    = 20 * time.Second // the server allows a ping every 10 s
	keepaliveTimeout = 10 * time.Second
	// What a server may send ahead of its reader: two blocks of simulated events on a
	// stream, so that one comes while the other is read.
	streamWindow     = 512 << 10
	connectionWindow = 4 << 20
)

// ServiceConfig is how Dial makes calls, in gRPC's own form for those who make their
// connections themselves. It balances over all addresses of a name, gives every unary call
// a deadline, waits for a server, and tries again where one answers UNAVAILABLE. The judge
// stream is kept out of the retry policy: a transport that replays its frames would judge
// events twice. Streams have no deadline here.
const ServiceConfig = `{
  "loadBalancingConfig": [{"round_robin": {}}],
  "retryThrottling": {"maxTokens": 10, "tokenRatio": 0.1},
  "methodConfig": [
    {
      "name": [
        {"service": "kinegate.v1.ParticleService"}, {"service": "kinegate.v1.ReactionService"},
        {"service": "kinegate.v1.DecayService"}, {"service": "kinegate.v1.PhotonService"},
        {"service": "kinegate.v1.InfoService"},
        {"service": "kinegate.v1.GenerationService", "method": "CheckGeneration"},
        {"service": "kinegate.v1.GenerationService", "method": "CheckDetector"},
        {"service": "kinegate.v1.GenerationService", "method": "MeasureBound"},
        {"service": "kinegate.v1.SelectionService", "method": "CheckSelection"},
        {"service": "kinegate.v1.SelectionService", "method": "JudgeBlock"},
        {"service": "kinegate.v1.SelectionService", "method": "ExplainVerdict"}
      ],
      "waitForReady": true,
      "timeout": "10s",
      "retryPolicy": {
        "maxAttempts": 5, "initialBackoff": "0.1s", "maxBackoff": "2s", "backoffMultiplier": 2,
        "retryableStatusCodes": ["UNAVAILABLE"]
      }
    },
    {
      "name": [
        {"service": "kinegate.v1.GenerationService", "method": "GenerateEvents"},
        {"service": "kinegate.v1.SelectionService", "method": "Judge"}
      ],
      "waitForReady": true
    }
  ]
}`

// Client is a connection with the clients of all services.
type Client struct {
	// Particles reads the particle table.
	Particles kinegatev1.ParticleServiceClient
	// Reactions answers questions about reactions.
	Reactions kinegatev1.ReactionServiceClient
	// Decays answers questions about decays.
	Decays kinegatev1.DecayServiceClient
	// Photons answers for processes with real photons and for fields of photons.
	Photons kinegatev1.PhotonServiceClient
	// Generation makes simulated events; ReadEvents reads its blocks.
	Generation kinegatev1.GenerationServiceClient
	// Selections checks selections and judges events; Judge is the better way to
	// its stream.
	Selections kinegatev1.SelectionServiceClient
	// Info describes the server.
	Info kinegatev1.InfoServiceClient

	conn *grpc.ClientConn
	// redial makes another connection to the same address; nil where only the caller
	// could.
	redial func() (*grpc.ClientConn, error)
}

// Dial prepares a connection to an address: "host:port", "dns:///name:port" for
// all replicas behind a name, or "unix:/path". It connects in the background; the
// first call waits for it.
func Dial(address string, options Options) (*Client, error) {
	creds, err := transportCredentials(options)
	if err != nil {
		return nil, err
	}
	dial := append([]grpc.DialOption{
		grpc.WithTransportCredentials(creds),
		grpc.WithDefaultServiceConfig(ServiceConfig),
		grpc.WithDefaultCallOptions(
			grpc.MaxCallRecvMsgSize(maxMessageBytes),
			grpc.MaxCallSendMsgSize(maxMessageBytes),
			grpc.ForceCodecV2(codec{encoding.GetCodecV2(proto.Name)}),
		),
		grpc.WithInitialWindowSize(streamWindow),
		grpc.WithInitialConnWindowSize(connectionWindow),
		grpc.WithKeepaliveParams(keepalive.ClientParameters{
			Time: keepaliveTime, Timeout: keepaliveTimeout, PermitWithoutStream: true,
		}),
	}, options.DialOptions...)
	redial := func() (*grpc.ClientConn, error) {
		conn, err := grpc.NewClient(address, dial...)
		if err != nil {
			return nil, fmt.Errorf("address %q: %w", address, err)
		}
		return conn, nil
	}
	conn, err := redial()
	if err != nil {
		return nil, err
	}
	c := NewClient(conn)
	c.redial = redial
	return c, nil
}

// NewClient returns the clients of a connection that the caller has made. Close
// closes the connection. Judge streams share it, and cannot leave it when it is dead.
func NewClient(conn *grpc.ClientConn) *Client {
	return &Client{
		Particles:  kinegatev1.NewParticleServiceClient(conn),
		Reactions:  kinegatev1.NewReactionServiceClient(conn),
		Decays:     kinegatev1.NewDecayServiceClient(conn),
		Photons:    kinegatev1.NewPhotonServiceClient(conn),
		Generation: kinegatev1.NewGenerationServiceClient(conn),
		Selections: kinegatev1.NewSelectionServiceClient(conn),
		Info:       kinegatev1.NewInfoServiceClient(conn),
		conn:       conn,
	}
}

// Close closes the connection and with it every stream.
func (c *Client) Close() error { return c.conn.Close() }

var errHalfPair = errors.New("a client certificate needs both CertFile and KeyFile")

func transportCredentials(o Options) (credentials.TransportCredentials, error) {
	if !o.TLS {
		if o.CAFile != "" || o.CertFile != "" || o.KeyFile != "" || o.ServerName != "" {
			return nil, errors.New("CAFile, CertFile, KeyFile and ServerName need TLS")
		}
		return insecure.NewCredentials(), nil
	}
	config := &tls.Config{MinVersion: tls.VersionTLS13, ServerName: o.ServerName}
	if o.CAFile != "" {
		pem, err := os.ReadFile(o.CAFile)
		if err != nil {
			return nil, fmt.Errorf("authorities: %w", err)
		}
		config.RootCAs = x509.NewCertPool()
		if !config.RootCAs.AppendCertsFromPEM(pem) {
			return nil, fmt.Errorf("authorities: %s holds no PEM certificate", o.CAFile)
		}
	}
	if (o.CertFile == "") != (o.KeyFile == "") {
		return nil, errHalfPair
	}
	if o.CertFile != "" {
		pair, err := tls.LoadX509KeyPair(o.CertFile, o.KeyFile)
		if err != nil {
			return nil, fmt.Errorf("client certificate: %w", err)
		}
		config.Certificates = []tls.Certificate{pair}
	}
	return credentials.NewTLS(config), nil
}
