//go:build race

package server

// slowdown allows for the race detector, which costs a factor of ten and more.
const slowdown = 400
