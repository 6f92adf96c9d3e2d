package selection

import (
	"math"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num"
)

// wide is the square of the difference of two unit vectors from which on it serves as
// it is. A direction errs by at most 3 x 2^-53 in length, the difference of two by
// 6 x 2^-53, so its square by 12 x 2^-53 over the angle between them; at the angle of
// 0.35 rad where the square is 1/8 that is 3.8e-15 relative.
const wide = 0.125

// pair is the place of the pair i < j in apart.
func (o *objects) pair(i, j int) int { return i*(2*o.count-i-1)/2 + j - i - 1 }

// separate computes
//
//	|p||q| - p.q = |p||q||u - v|^2/2
//
// for every pair of objects with directions u and v that are measured in full, once
// for an event. It is within 4e-15 relative: a narrow pair takes the form that the
// coordinate set has for it.
func (o *objects) separate() {
	if o.apartReady {
		return
	}
	o.apartReady = true
	k := 0
	for i := range o.count {
		u, p := o.direction[i], o.length[i]
		for j := i + 1; j < o.count; j++ {
			v := &o.direction[j]
			dx, dy, dz := u.X-v.X, u.Y-v.Y, u.Z-v.Z
			square := float64(dx*dx) + float64(dy*dy) + float64(dz*dz)
			if square >= wide {
				o.apart[k] = p * o.length[j] * square / 2
			} else {
				o.apart[k] = o.narrow(i, j)
			}
			k++
		}
	}
}

// narrow returns |p||q| - p.q of two objects less than a right angle apart, without a
// difference of what is nearly equal and rounded:
//
//	Cartesian:   |p x q|^2 / (|p||q| + p.q)
//	angles:      2|p||q| (sin^2((theta1-theta2)/2) + sin theta1 sin theta2 sin^2((phi1-phi2)/2))
//	transverse:  2 pt qt (sinh^2((eta1-eta2)/2) + sin^2((phi1-phi2)/2))
//	slopes:      |p||q| |a x b|^2 / (|a||b| (|a||b| + a.b)),  a = (px/pz, py/pz, 1)
func (o *objects) narrow(i, j int) float64 {
	x, a, b := o.coordinates, o.first+i, o.first+j
	lengths := float64(o.length[i] * o.length[j])
	switch x.Kind {
	case event.MomentumAngles:
		theta, phi := x.Columns[1], x.Columns[2]
		return 2 * lengths * momentum.HalfAngleSineSquared(theta[a], phi[a], theta[b], phi[b])
	case event.TransverseMomentum:
		eta, phi := x.Columns[1], x.Columns[2]
		polar := num.Sinh((eta[a] - eta[b]) / 2)
		azimuth := num.Sin((phi[a] - phi[b]) / 2)
		return 2 * x.Columns[0][a] * x.Columns[0][b] * (float64(polar*polar) + float64(azimuth*azimuth))
	case event.MomentumSlopes:
		p := momentum.Three{X: x.Columns[1][a], Y: x.Columns[2][a], Z: 1}
		q := momentum.Three{X: x.Columns[1][b], Y: x.Columns[2][b], Z: 1}
		norms := math.Sqrt(p.Square() * q.Square())
		return lengths * p.Cross(q).Square() / (norms * (norms + p.Dot(q)))
	default:
	}
	p, q := o.momentum[i], o.momentum[j]
	if sum := lengths + p.Dot(q); sum > 0 {
		return p.Cross(q).Square() / sum
	}
	return 0 // one of them is 0
}

// table holds the invariant products of every pair of objects under two kinds of
// mass, row first for the first kind.
type table struct {
	ready   bool
	product [maxObjects * maxObjects]float64
}

// at is the place of the product of objects i and j.
func at(i, j uint8) int { return int(i)*maxObjects + int(j) }

// load computes the products
//
//	Ea Eb - pa.pb = (sa Eb^2 + sb pa^2)/(Ea Eb + |pa||pb|) + (|pa||pb| - pa.pb)
//
// with the signed mass squared s = E^2 - p^2 of each, a sum of positive terms where
// both are positive: within 4e-15 relative.
// It follows from (Ea Eb)^2 - (pa pb)^2 = sa Eb^2 + sb pa^2.
func (t *table) load(o *objects, a, b *motion, same bool) {
	t.ready = true
	o.separate()
	for i := range o.count {
		if !o.full.has(i) {
			continue
		}
		for j := range o.count {
			if j == i || !o.full.has(j) {
				continue
			}
			low, high := min(i, j), max(i, j)
			if same && low != i {
				t.product[i*maxObjects+j] = t.product[j*maxObjects+i]
				continue
			}
			product := o.apart[o.pair(low, high)]
			length := o.length[i]
			lengths := float64(length * o.length[j])
			if a.merged || b.merged {
				// A cluster of merged photons measures the energy, not the momentum.
				length *= a.scale[i]
				lengths = float64(length * (o.length[j] * b.scale[j]))
				product = float64(product * (a.scale[i] * b.scale[j]))
			}
			if a.square[i] != 0 || b.square[j] != 0 {
				energies := float64(a.energy[i] * b.energy[j])
				if sum := energies + lengths; sum > 0 {
					first := float64(a.square[i] * float64(b.energy[j]*b.energy[j]))
					second := float64(b.square[j] * float64(length*length))
					product += (first + second) / sum
				}
			}
			t.product[i*maxObjects+j] = product
		}
	}
}
