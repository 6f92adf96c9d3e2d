package detector

import (
	"math"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num"
	"example.org/kinegate/kinematics/num/random"
)

// NoParticle is the label of an object that no particle made.
const NoParticle = -1

// object is one measured object of the event being measured.
type object struct {
	class            event.Class
	mask, species    uint8
	size, theta, phi float64
	// variances of the three, which are independent.
	varSize, varTheta, varPhi float64
	hit                       momentum.Three // where a photon hit, in metres
	label                     int16
}

// before orders the objects of an event: photons, tracks, others, each by
// falling energy or momentum, so that the order tells nothing of the truth.
func (o *object) before(p *object) bool {
	if a, b := o.rank(), p.rank(); a != b {
		return a < b
	}
	return o.size > p.size
}

func (o *object) rank() int {
	switch o.class {
	case event.Photon:
		return 0
	case event.Positive, event.Negative:
		return 1
	case event.Neutral:
	}
	return 2
}

// point writes a smeared direction: theta by one normal deviate, phi by
// another over sin(theta). The variances are those at the measured direction.
func (o *object) point(s *random.Stream, theta, phi, sigmaTheta, sigmaPhi float64) {
	sin := num.Sin(theta)
	theta += float64(sigmaTheta * s.Normal())
	phi += float64(sigmaPhi / sin * s.Normal())
	o.theta, o.phi = folded(theta, phi)
	sin = num.Sin(o.theta)
	o.varTheta = sigmaTheta * sigmaTheta
	o.varPhi = float64(sigmaPhi*sigmaPhi) / float64(sin*sin)
}

// folded brings theta past a pole back to [0, pi], with phi turned by pi, and
// phi to (-pi, pi].
func folded(theta, phi float64) (inRange, turned float64) {
	if theta < 0 {
		theta, phi = -theta, phi+math.Pi
	}
	if theta > math.Pi {
		theta, phi = 2*math.Pi-theta, phi+math.Pi
	}
	turns := math.Ceil((phi - math.Pi) / (2 * math.Pi))
	phi -= float64(turns * (2 * math.Pi))
	return theta, phi
}

// unit is the direction of polar angle theta and azimuth phi.
func unit(theta, phi float64) momentum.Three {
	sinT, cosT := num.Sincos(theta)
	sinP, cosP := num.Sincos(phi)
	return momentum.Three{X: sinT * cosP, Y: sinT * sinP, Z: cosT}
}

// toSphere returns the point at which a ray from inside a sphere around the
// centre leaves it, and false for a start outside.
//
//	origin + t d with t = -o.d + sqrt((o.d)^2 + (R - |o|)(R + |o|))
func toSphere(origin, direction momentum.Three, radius float64) (momentum.Three, bool) {
	size := origin.Norm()
	if !(size < radius) {
		return momentum.Three{}, false
	}
	along := origin.Dot(direction)
	t := math.Sqrt(float64(along*along)+float64((radius-size)*(radius+size))) - along
	return momentum.Three{
		X: origin.X + float64(t*direction.X),
		Y: origin.Y + float64(t*direction.Y),
		Z: origin.Z + float64(t*direction.Z),
	}, true
}
