// Package generation makes simulated events: a beam on a target or on another
// beam, a reaction or a mixture of them, phase space shaped by line shapes,
// angles and decay densities, and decays in flight down to what a detector
// sees.
//
// Everything drawn for event i comes from the random stream of i alone, so an
// event is the same event whatever slice, block or worker made it.
//
// Units are GeV (c = 1), metre and second. The beam flies along +z; where two
// beams meet, the axes are those of momentum.BeamsAtAngle.
package generation
