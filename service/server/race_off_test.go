//go:build !race

package server

// slowdown is what figures may take longer than asked: nothing without the race detector.
const slowdown = 1
