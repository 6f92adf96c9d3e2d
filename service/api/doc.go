// Package api answers the rpcs of kinegate.v1. It holds one file per rpc service,
// and every handler has the same four steps: validate the request, convert it to
// the plain structs of the core, call the core, convert the answer back. Generated
// types stop here.
//
// # Errors
//
// Handlers return ordinary Go errors: those of the core (*fault.Error and
// fault.List, wrapped or not), a *Failure where the service itself refuses, or the
// error of the context. They never build a gRPC status. The server's outermost
// interceptor passes what comes out to Explain, which finds the registered Reason,
// and to Failure.Status, which makes the one form that callers see:
//
//   - a code that depends on the reason alone (see Reasons),
//   - one ErrorInfo with the reason, Domain and metadata about this request,
//   - one BadRequest when fields are at fault, with at most 16 of them; the
//     metadata key violation_count holds how many there were,
//   - one RetryInfo when the caller may try again after a while,
//   - no more than 4 KiB in all.
//
// A handler that needs another reason than the kind of the core's error gives uses
// Because: a particle asked for by name is ParticleNotFound, the same name inside
// a reaction text NameUnknown. In puts a path in front of the fields that an error
// names. Whatever none of this knows becomes InternalFault: the caller gets a
// reference, the log gets the cause.
//
// # Goroutines
//
// A handler that starts goroutines runs their bodies through Contain and returns
// the error it gives, so that a panic ends one call and not the process.
package api
