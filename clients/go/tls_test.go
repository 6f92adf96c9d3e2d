package kinegate_test

import (
	"context"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"google.golang.org/grpc"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// TestCredentialsThatCannotWork are refused by Dial, before anything is sent.
func TestCredentialsThatCannotWork(t *testing.T) {
	t.Parallel()
	folder := t.TempDir()
	certificate, key := writeCertificate(folder)
	other, _ := writeCertificate(t.TempDir())
	text := filepath.Join(folder, "text")
	if err := os.WriteFile(text, []byte("no certificate"), 0o600); err != nil {
		t.Fatal(err)
	}
	for name, c := range map[string]struct {
		options kinegate.Options
		want    string
	}{
		"authority without TLS":   {kinegate.Options{CAFile: certificate}, "need TLS"},
		"certificate without TLS": {kinegate.Options{CertFile: certificate}, "need TLS"},
		"key without TLS":         {kinegate.Options{KeyFile: key}, "need TLS"},
		"name without TLS":        {kinegate.Options{ServerName: "localhost"}, "need TLS"},
		"certificate alone":       {kinegate.Options{TLS: true, CertFile: certificate}, "both CertFile and KeyFile"},
		"key alone":               {kinegate.Options{TLS: true, KeyFile: key}, "both CertFile and KeyFile"},
		"key of another":          {kinegate.Options{TLS: true, CertFile: other, KeyFile: key}, "client certificate: "},
		"no such authority":       {kinegate.Options{TLS: true, CAFile: filepath.Join(folder, "none")}, "authorities: "},
		"authority is no PEM":     {kinegate.Options{TLS: true, CAFile: text}, "holds no PEM certificate"},
	} {
		client, err := kinegate.Dial("127.0.0.1:1", c.options)
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %v, want %q", name, err, c.want)
		}
		if err == nil {
			_ = client.Close()
		}
	}
}

// TestTLSIsUsed: a caller that trusts another authority, shows no certificate or expects
// another name gets no answer.
func TestTLSIsUsed(t *testing.T) {
	t.Parallel()
	server := startTLSServer()
	defer server.stop()
	other, otherKey := writeCertificate(t.TempDir())
	whole := kinegate.Options{TLS: true, CAFile: server.certificate, CertFile: server.certificate, KeyFile: server.key, ServerName: "localhost"}
	for _, c := range []struct {
		name   string
		change func(o *kinegate.Options)
		well   bool
	}{
		{"whole", func(*kinegate.Options) {}, true},
		{"by address", func(o *kinegate.Options) { o.ServerName = "" }, true},
		{"another authority", func(o *kinegate.Options) { o.CAFile = other }, false},
		{"another name", func(o *kinegate.Options) { o.ServerName = "gate.example.org" }, false},
		{"no certificate", func(o *kinegate.Options) { o.CertFile, o.KeyFile = "", "" }, false},
		{"another certificate", func(o *kinegate.Options) { o.CertFile, o.KeyFile = other, otherKey }, false},
	} {
		options := whole
		c.change(&options)
		client, err := kinegate.Dial(server.general, options)
		if err != nil {
			t.Fatal(err)
		}
		ctx, cancel := context.WithTimeout(t.Context(), 5*time.Second)
		_, err = client.Info.GetInfo(ctx, &kinegatev1.GetInfoRequest{}, grpc.WaitForReady(false))
		cancel()
		if (err == nil) != c.well {
			t.Errorf("%s: %v", c.name, err)
		}
		_ = client.Close()
	}
}
