package constraint

// vector is a four-momentum, or a derivative of one, or a covector that is applied
// to one: x, y, z, energy.
type vector [4]float64

// on returns the value of the covector c on the vector v: the plain sum of products.
func (c *vector) on(v *vector) float64 {
	return float64(c[0]*v[0]) + float64(c[1]*v[1]) + float64(c[2]*v[2]) + float64(c[3]*v[3])
}

// on3 returns the scalar product of the momentum with v.
func (c *vector) on3(v *[3]float64) float64 {
	return float64(c[0]*v[0]) + float64(c[1]*v[1]) + float64(c[2]*v[2])
}

// lowered returns the covector of v: energy, and the momentum with the other sign.
func (c *vector) lowered(scale float64) vector {
	return vector{-scale * c[0], -scale * c[1], -scale * c[2], scale * c[3]}
}

// set sets c to scale times v.
func (c *vector) set(scale float64, v *vector) {
	c[0], c[1], c[2], c[3] = scale*v[0], scale*v[1], scale*v[2], scale*v[3]
}

// add adds scale times v.
func (c *vector) add(scale float64, v *vector) {
	c[0] += float64(scale * v[0])
	c[1] += float64(scale * v[1])
	c[2] += float64(scale * v[2])
	c[3] += float64(scale * v[3])
}

// dot3 returns the scalar product of two momenta.
func dot3(a, b *[3]float64) float64 {
	return float64(a[0]*b[0]) + float64(a[1]*b[1]) + float64(a[2]*b[2])
}
