// Package conformance reads the cases of testdata/rpc and plays them: calls against a
// server, and judge streams against a server or, as a double of one, against a client.
// The README there states the form of the files and the rules of comparison.
package conformance
