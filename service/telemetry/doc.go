// Package telemetry holds what operators see of a running server: metrics on a
// registry and log lines on a writer, both injected. Metrics are made per server
// rather than per package, so that a process can run several servers, as tests and
// the commands with an embedded server do.
package telemetry
