package num

// Layout of an IEEE 754 double.
const (
	mask  = 0x7FF
	shift = 64 - 11 - 1
	bias  = 1023
)
