package fault

import "strconv"

// maxShown bounds how many faults of a List its text spells out.
const maxShown = 16

// List is several faults found in one input, in the order of their position. An
// empty list is no fault: return it through Err.
type List []*Error

// Err returns the list as an error, or nil if it is empty.
func (l List) Err() error {
	if len(l) == 0 {
		return nil
	}
	return l
}

// Error renders one fault a line, at most sixteen of them and then a count.
func (l List) Error() string {
	text := ""
	for i, e := range l {
		if i == maxShown {
			return text + "\nand " + strconv.Itoa(len(l)-maxShown) + " more"
		}
		if i > 0 {
			text += "\n"
		}
		text += e.Error()
	}
	return text
}

// Unwrap returns the faults for errors.Is and errors.As.
func (l List) Unwrap() []error {
	errs := make([]error, len(l))
	for i, e := range l {
		errs[i] = e
	}
	return errs
}
