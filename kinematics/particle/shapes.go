package particle

// notBreitWigner names the source that says why no Breit-Wigner shape describes the
// state with the number, or "" for all other states. The statements are those of the
// Review of Particle Physics, from memory.
func notBreitWigner(number int64) string {
	switch number {
	case 9010221, 9000111, 9000211:
		return "Review of Particle Physics, review of the scalar mesons below 2 GeV: couples strongly to " +
			"the K Kbar threshold inside its width, so that a coupled-channel shape is needed"
	case 10321, 10311:
		return "Review of Particle Physics, review of the scalar mesons below 2 GeV: the S-wave K pi " +
			"amplitude has a large non-resonant part that no Breit-Wigner describes"
	case 13122:
		return "Review of Particle Physics, review of the pole structure of the Lambda(1405) region: two " +
			"poles, and the Kbar N threshold inside the width"
	case 20213, 20113:
		return "Review of Particle Physics, listing of a1(1260): the width is dominated by a three-body " +
			"final state and depends on the model"
	}
	return ""
}
