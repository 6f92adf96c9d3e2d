package server

import (
	"context"
	"crypto/sha256"
	"crypto/tls"
	"crypto/x509"
	"encoding/pem"
	"errors"
	"fmt"
	"sync/atomic"
	"time"

	"github.com/rs/zerolog"

	"example.org/kinegate/service/telemetry"
)

// rereadPeriod is how often certificate files are looked at. Their content decides,
// not their time or name: orchestrators swap a link to a folder of new files.
const rereadPeriod = 10 * time.Second

// certificates serves the newest sound set of certificate files.
type certificates struct {
	options *Options
	metrics *telemetry.Metrics
	log     func() *zerolog.Logger
	sum     [sha256.Size]byte
	current atomic.Pointer[tls.Config]
}

// loadCertificates reads the files for the first time.
func loadCertificates(o *Options, metrics *telemetry.Metrics, log func() *zerolog.Logger) (*certificates, error) {
	c := &certificates{options: o, metrics: metrics, log: log}
	if _, err := c.reread(); err != nil {
		return nil, err
	}
	return c, nil
}

// config is the configuration of the listeners. Every new connection gets the set that
// is current. Sessions are not resumed: connections are long, and a resumed one would
// skip the check of the caller's certificate against new authorities.
func (c *certificates) config() *tls.Config {
	return &tls.Config{
		MinVersion:             tls.VersionTLS13,
		NextProtos:             []string{"h2"},
		SessionTicketsDisabled: true,
		GetConfigForClient:     func(*tls.ClientHelloInfo) (*tls.Config, error) { return c.current.Load(), nil },
	}
}

// watch rereads the files until the context ends. Bad files keep the old set.
func (c *certificates) watch(ctx context.Context) {
	ticker := time.NewTicker(rereadPeriod)
	defer ticker.Stop()
	for {
		select {
		case <-ctx.Done():
			return
		case <-ticker.C:
			changed, err := c.reread()
			switch {
			case err != nil:
				c.log().Error().Err(err).Msg("certificate files are bad, the old set stays in use")
			case changed:
				c.log().Info().Msg("certificate files have changed, the new set is in use")
			}
		}
	}
}

// reread reads the files and takes them into use if their content has changed.
func (c *certificates) reread() (changed bool, err error) {
	defer func() { c.metrics.CertificatesReloaded(err == nil) }()
	chain, err := readFile("certificate_file", c.options.CertificateFile)
	if err != nil {
		return false, err
	}
	key, err := readFile("key_file", c.options.KeyFile)
	if err != nil {
		return false, err
	}
	var authorities []byte
	if c.options.ClientCAFile != "" {
		if authorities, err = readFile("client_ca_file", c.options.ClientCAFile); err != nil {
			return false, err
		}
	}
	sum := sumOf(chain, key, authorities)
	if c.current.Load() != nil && sum == c.sum {
		return false, nil
	}
	config, err := c.build(chain, key, authorities)
	if err != nil {
		return false, err
	}
	c.sum = sum
	c.current.Store(config)
	return true, nil
}

// build makes the configuration of one set and notes when it expires.
func (c *certificates) build(chain, key, authorities []byte) (*tls.Config, error) {
	pair, err := tls.X509KeyPair(chain, key)
	if err != nil {
		return nil, badFile("certificate_file", c.options.CertificateFile, "a PEM chain that fits the key in key_file", err)
	}
	if now := time.Now(); now.After(pair.Leaf.NotAfter) {
		return nil, badFile("certificate_file", c.options.CertificateFile, "a certificate that has not expired",
			fmt.Errorf("it expired at %s", pair.Leaf.NotAfter.UTC().Format(time.RFC3339)))
	}
	config := &tls.Config{
		MinVersion:             tls.VersionTLS13,
		NextProtos:             []string{"h2"},
		SessionTicketsDisabled: true,
		Certificates:           []tls.Certificate{pair},
	}
	if authorities != nil {
		pool, end, err := authorityPool(authorities)
		if err != nil {
			return nil, badFile("client_ca_file", c.options.ClientCAFile, "PEM certificates of authorities", err)
		}
		config.ClientCAs, config.ClientAuth = pool, tls.RequireAndVerifyClientCert
		c.metrics.CertificateExpiry("client_ca", end)
	}
	c.metrics.CertificateExpiry("server", pair.Leaf.NotAfter)
	return config, nil
}

// authorityPool reads authorities and the earliest end of their validity.
func authorityPool(data []byte) (*x509.CertPool, time.Time, error) {
	pool, end := x509.NewCertPool(), time.Time{}
	for {
		var block *pem.Block
		if block, data = pem.Decode(data); block == nil {
			break
		}
		certificate, err := x509.ParseCertificate(block.Bytes)
		if err != nil {
			return nil, end, fmt.Errorf("a block is no certificate: %w", err)
		}
		pool.AddCert(certificate)
		if end.IsZero() || certificate.NotAfter.Before(end) {
			end = certificate.NotAfter
		}
	}
	if end.IsZero() {
		return nil, end, errors.New("there is no certificate in it")
	}
	return pool, end, nil
}

// sumOf is a digest of several contents that no shift of bytes between them keeps.
func sumOf(contents ...[]byte) [sha256.Size]byte {
	var all []byte
	for _, c := range contents {
		s := sha256.Sum256(c)
		all = append(all, s[:]...)
	}
	return sha256.Sum256(all)
}
