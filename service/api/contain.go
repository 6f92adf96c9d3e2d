package api

import (
	"fmt"
	"runtime/debug"
)

// PanicError is a panic that was contained. Explain makes it an InternalFault; the
// server counts it and logs the stack.
type PanicError struct {
	// Value is what was passed to panic.
	Value any
	// Stack is the stack of the goroutine that panicked.
	Stack []byte
}

// Error names the value of the panic; it reaches the log only.
func (p *PanicError) Error() string { return fmt.Sprintf("panic: %v", p.Value) }

// Contain runs body and returns its error, or a *PanicError if it panics. gRPC does
// not recover by itself: one panic in a handler or in a goroutine it started would
// end the process with every other call.
func Contain(body func() error) (err error) {
	defer func() {
		if v := recover(); v != nil {
			err = &PanicError{Value: v, Stack: debug.Stack()}
		}
	}()
	return body()
}
