package detector

import (
	"math"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num"
)

// cluster is a true energy deposit: one photon, or several that merged.
type cluster struct {
	energy    float64
	direction momentum.Three // as the calorimeter refers to it
	origin    momentum.Three
	label     int16
}

// gather adds the deposit of a photon inside the acceptance.
func (w *worker) gather(p momentum.Four, origin momentum.Three, label int16) {
	d := w.config.Calorimeter
	direction := p.P.Unit()
	if d.RadiusM > 0 {
		hit, inside := toSphere(origin, direction, d.RadiusM)
		if !inside {
			return
		}
		if d.FromCentre {
			direction, origin = hit.Unit(), momentum.Three{}
		}
	}
	w.clusters = append(w.clusters, cluster{energy: p.E, direction: direction, origin: origin, label: label})
}

// calorimeter turns the deposits of the event into measured clusters.
func (w *worker) calorimeter() {
	d := w.config.Calorimeter
	w.merge(d.MergeAngleRad)
	for i := range w.clusters {
		c := w.clusters[i]
		if s := d.SplitOff; s != nil && w.stream.Chance(s.Probability) {
			share := between(s.MinShare, s.MaxShare, w.stream.Uniform())
			angle := between(s.MinAngleRad, s.MaxAngleRad, w.stream.Uniform())
			part := c
			part.energy = c.energy * share
			part.direction = aside(c.direction, angle, 2*math.Pi*w.stream.Uniform())
			c.energy *= 1 - share
			w.photon(&part)
		}
		w.photon(&c)
	}
	if n := d.Noise; n != nil && w.stream.Chance(n.Probability) {
		w.noise(n)
	}
}

// merge joins the closest two deposits until no two are closer than the angle.
func (w *worker) merge(angle float64) {
	for angle > 0 {
		best, first, second := angle, 0, 0
		for i := range w.clusters {
			for k := i + 1; k < len(w.clusters); k++ {
				if a := w.clusters[i].direction.Angle(w.clusters[k].direction); a < best {
					best, first, second = a, i, k
				}
			}
		}
		if second == 0 {
			return
		}
		a, b := &w.clusters[first], w.clusters[second]
		a.direction = a.direction.Scale(a.energy).Add(b.direction.Scale(b.energy)).Unit()
		if b.energy > a.energy {
			a.label, a.origin = b.label, b.origin
		}
		a.energy += b.energy
		w.clusters = append(w.clusters[:second], w.clusters[second+1:]...)
	}
}

// variance is a^2 E + b^2 E^2 + c^2.
func (d *Calorimeter) variance(e float64) float64 {
	return float64(d.Stochastic*d.Stochastic*e) + float64(d.Constant*d.Constant*e*e) + float64(d.NoiseGeV*d.NoiseGeV)
}

// photon measures a deposit.
func (w *worker) photon(c *cluster) {
	d := w.config.Calorimeter
	theta := c.direction.Theta()
	if !d.Theta.holds(theta) || !w.stream.Chance(d.Efficiency) {
		return
	}
	e := c.energy + float64(math.Sqrt(d.variance(c.energy))*w.stream.Normal())
	o := object{class: event.Photon, mask: event.AllMeasured, label: c.label, size: e, varSize: d.variance(e)}
	o.point(&w.stream, theta, c.direction.Phi(), d.ThetaSigmaRad, d.PhiSigmaRad)
	if !(e >= d.ThresholdGeV) {
		return
	}
	w.place(&o, c.origin)
	w.objects = append(w.objects, o)
}

// place gives a measured photon its hit, and its covariance the unknown vertex.
func (w *worker) place(o *object, origin momentum.Three) {
	d := w.config.Calorimeter
	if d.RadiusM == 0 {
		return
	}
	o.hit, _ = toSphere(origin, unit(o.theta, o.phi), d.RadiusM)
	if d.FromCentre {
		x := d.SpreadZM * num.Sin(o.theta) / d.RadiusM
		o.varTheta += float64(x * x)
	}
}

// noise adds a cluster that no photon made.
func (w *worker) noise(n *Noise) {
	d := w.config.Calorimeter
	e := d.ThresholdGeV + float64(n.MeanGeV*w.stream.Exponential())
	cos := between(num.Cos(d.Theta.MaxRad), num.Cos(d.Theta.MinRad), w.stream.Uniform())
	theta := num.Atan2(math.Sqrt((1-cos)*(1+cos)), cos)
	_, phi := folded(theta, float64(2*math.Pi*w.stream.Uniform()))
	sin := num.Sin(theta)
	o := object{
		class: event.Photon, mask: event.AllMeasured, label: NoParticle,
		size: e, theta: theta, phi: phi,
		varSize: d.variance(e), varTheta: d.ThetaSigmaRad * d.ThetaSigmaRad,
		varPhi: d.PhiSigmaRad * d.PhiSigmaRad / (sin * sin),
	}
	w.place(&o, momentum.Three{})
	w.objects = append(w.objects, o)
}

// aside is the direction at an angle from another one, turned around it by phi.
func aside(d momentum.Three, angle, phi float64) momentum.Three {
	from := momentum.Three{X: 1}
	if math.Abs(d.X) > 0.7 {
		from = momentum.Three{Y: 1}
	}
	y := d.Cross(from).Unit()
	x := y.Cross(d)
	sin, cos := num.Sincos(angle)
	sinPhi, cosPhi := num.Sincos(phi)
	return x.Scale(sin * cosPhi).Add(y.Scale(sin * sinPhi)).Add(d.Scale(cos))
}

// between is the point a fraction u of the way from low to high.
func between(low, high, u float64) float64 { return low + float64((high-low)*u) }
