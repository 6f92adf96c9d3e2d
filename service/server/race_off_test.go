//go:build !race

package server

// slowdown allows for a machine that does other things too: the figure itself is logged,
// and the test holds that the cost stays of its order.
const slowdown = 4
