// Package server is the gRPC server of kinegate: listeners, credentials, limits, what
// happens around every call, health, metrics over HTTP and the way it starts and
// stops. The answers themselves come from package api.
//
// # Listeners
//
// Two listeners answer rpcs. Gate is for judge streams, with large flow-control
// windows; General is for everything else, with small ones. Both offer every
// service, so that a small installation can use one address, and each is a server of
// its own, so that neither waits for the other's connections. Three more are plain
// and for operators: Health (grpc.health.v1 alone), Metrics (HTTP: /metrics, /livez,
// /readyz) and Debug (profiles and channelz; loopback only).
//
// # Around a call
//
// Every call passes front.answer, whose lines are the layers in their order: the
// record (metrics and log) sees everything; below it a panic is contained; then the
// caller is authorised, then admitted, before any work; last, the deadline is set, the
// message received, its work admitted by cost, and the handler runs. What is open long
// is authorised again every few seconds. Unary calls are registered as streams with one
// message each way, which is what gRPC makes of them anyway: it lets one chain serve
// both, and it lets bytes that do not decode, messages over the limit and unknown
// methods be answered through the registry of reasons like all else.
//
// Messages are read frame by frame below gRPC's own reading, and lists of headers are
// measured as soon as they are there, so that what is over a limit or compressed is
// answered with its reason as well. Without an ErrorInfo remain: compressions other than
// gzip (UNIMPLEMENTED), lists of headers over four times the limit (the stream ends),
// requests that are not gRPC (an HTTP status). A deadline that the caller itself set
// passes in the caller.
//
// # Reload
//
// Settings that Setting.Reloads names, and the access file, are taken anew together: a
// call keeps the inUse it began with.
//
// # Life
//
// New checks the options and loads the files they name. Listen opens the sockets.
// Serve recomputes a known answer, turns health to SERVING and blocks. Shutdown turns
// health to NOT_SERVING, keeps serving for the notice, tells the streams to end,
// lets calls finish, and cuts what is left when the time is up or its context ends.
package server
