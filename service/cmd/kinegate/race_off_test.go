//go:build !race

package main

// raceDetector says that the tests do not run under the race detector.
const raceDetector = false
