// Package kinematics is the root of the shared core: relativistic kinematics with plain
// structs in and out, below every service, command and client of this project.
//
// The packages lie in layers, and each imports only from layers below its own:
//
//	planning
//	selection  generation  detector
//	reaction  decay  photon  constraint
//	event
//	momentum  particle
//	num  fault
//
// The core imports the standard library and itself, and of the standard library nothing that
// logs, reads a clock or touches the outside. Results have the same bits on every processor:
// a product that feeds an addition or a subtraction is rounded first, as float64(a*b), or
// joined to it on purpose, by math.FMA; functions beyond the exact ones of package math come
// from num; no result depends on the order of a map. The tests beside this file hold all of
// this for the whole module, and each of them is itself tested on a seeded offence.
package kinematics

// NumericsVersion counts the changes of result bits. Any change of the core that alters one
// bit of an event, a fit or a verdict raises it, and the golden digests are rewritten with it.
// It is part of every selection digest.
const NumericsVersion = 1
