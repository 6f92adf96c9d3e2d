package conformance

import (
	"encoding/json"
	"fmt"
	"math"
)

// compare checks that what came holds what is due: each member named must be there and
// agree, lists have the same length, numbers agree within a relative tolerance, null
// says absent. Members that are not named are free.
func compare(due, came []byte, tolerance float64) error {
	var d, c any
	if err := json.Unmarshal(due, &d); err != nil {
		return fmt.Errorf("what is due: %w", err)
	}
	if err := json.Unmarshal(came, &c); err != nil {
		return fmt.Errorf("what came: %w", err)
	}
	return agree("", d, c, tolerance)
}

func agree(path string, due, came any, tolerance float64) error {
	switch d := due.(type) {
	case map[string]any:
		c, ok := came.(map[string]any)
		if !ok {
			return differ(path, due, came)
		}
		for name, value := range d {
			if err := agree(path+"."+name, value, c[name], tolerance); err != nil {
				return err
			}
		}
		return nil
	case []any:
		c, ok := came.([]any)
		if !ok || len(c) != len(d) {
			return differ(path, due, came)
		}
		for i := range d {
			if err := agree(fmt.Sprintf("%s[%d]", path, i), d[i], c[i], tolerance); err != nil {
				return err
			}
		}
		return nil
	case float64:
		c, ok := came.(float64)
		if !ok || math.Abs(c-d) > tolerance*math.Abs(d) {
			return differ(path, due, came)
		}
		return nil
	}
	if due != came {
		return differ(path, due, came)
	}
	return nil
}

func differ(path string, due, came any) error {
	return fmt.Errorf("%s is %v where %v is due", path, came, due)
}
