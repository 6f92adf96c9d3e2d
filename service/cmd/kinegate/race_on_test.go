//go:build race

package main

// raceDetector says that the tests run under the race detector, whose shadow memory
// is several times that of the program: bounds of memory say nothing there.
const raceDetector = true
