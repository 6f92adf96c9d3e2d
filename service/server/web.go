package server

import (
	"io"
	stdlog "log"
	"net/http"
	"net/http/pprof"
	"time"

	"github.com/prometheus/client_golang/prometheus"
	"github.com/prometheus/client_golang/prometheus/promhttp"
	"github.com/rs/zerolog"
	"google.golang.org/grpc"
	channelz "google.golang.org/grpc/channelz/service"
)

// Bounds of the HTTP listeners. Profiles take as long as they are asked to, a scrape
// does not.
const (
	webHeaderTimeout  = 5 * time.Second
	webIdleTimeout    = 2 * time.Minute
	webScrapeTimeout  = 10 * time.Second
	webHeaderBytes    = 16 << 10
	webScrapesAtATime = 4
)

// metricsWeb serves metrics and the two states of health.
func metricsWeb(registry *prometheus.Registry, h *health, log zerolog.Logger) *http.Server {
	mux := http.NewServeMux()
	mux.Handle("GET /metrics", promhttp.HandlerFor(registry, promhttp.HandlerOpts{
		EnableOpenMetrics:   true,
		MaxRequestsInFlight: webScrapesAtATime,
		Timeout:             webScrapeTimeout,
		Registry:            registry,
	}))
	mux.HandleFunc("GET /livez", func(w http.ResponseWriter, _ *http.Request) { state(w, true) })
	mux.HandleFunc("GET /readyz", func(w http.ResponseWriter, _ *http.Request) { state(w, h.isReady()) })
	return web(mux, log)
}

// debugWeb serves profiles and, over HTTP/2, what gRPC knows of its own servers, channels
// and connections.
func debugWeb(log zerolog.Logger) *http.Server {
	mux := http.NewServeMux()
	known := grpc.NewServer()
	channelz.RegisterChannelzServiceToServer(known)
	mux.Handle("POST /grpc.channelz.v1.Channelz/", known)
	mux.HandleFunc("GET /debug/pprof/", pprof.Index)
	mux.HandleFunc("GET /debug/pprof/cmdline", pprof.Cmdline)
	mux.HandleFunc("GET /debug/pprof/profile", pprof.Profile)
	mux.HandleFunc("GET /debug/pprof/symbol", pprof.Symbol)
	mux.HandleFunc("GET /debug/pprof/trace", pprof.Trace)
	w := web(mux, log)
	w.Protocols = new(http.Protocols)
	w.Protocols.SetHTTP1(true)
	w.Protocols.SetUnencryptedHTTP2(true)
	w.RegisterOnShutdown(known.Stop)
	return w
}

// web returns an HTTP server within its bounds, which logs what it complains about as
// all else is logged.
func web(handler http.Handler, log zerolog.Logger) *http.Server {
	return &http.Server{
		Handler: handler, ReadHeaderTimeout: webHeaderTimeout, IdleTimeout: webIdleTimeout,
		MaxHeaderBytes: webHeaderBytes,
		ErrorLog:       stdlog.New(log, "", 0), //nolint:forbidigo // the type that net/http takes
	}
}

// state writes a state of health.
func state(w http.ResponseWriter, good bool) {
	w.Header().Set("Content-Type", "text/plain; charset=utf-8")
	text := "ok\n"
	if !good {
		w.WriteHeader(http.StatusServiceUnavailable)
		text = "not ready\n"
	}
	// Whoever asked may be gone; there is nobody else to tell.
	_, _ = io.WriteString(w, text)
}
