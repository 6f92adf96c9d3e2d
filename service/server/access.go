package server

import (
	"fmt"
	"slices"
	"strings"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/service/api"
)

// anyMethod stands in an access file for every method.
const anyMethod = "*"

// accessForm says how an access file is written.
const accessForm = "lines of an identity and what it may call: package.Service/Method, package.Service or *"

// access says which identity may call which methods. What is not listed is denied.
type access struct {
	// allowed are the patterns of each identity: a method with its slashes, a service
	// with its slashes, or anyMethod.
	allowed map[string][]string
}

// readAccess reads the file of a setting. A line is an identity and what it may call,
// with blanks between; # starts a comment. An identity is a URI or a DNS name that the
// caller's certificate carries, compared as it stands.
func readAccess(path string) (*access, error) {
	data, err := readFile("access_file", path)
	if err != nil {
		return nil, err
	}
	a := &access{allowed: map[string][]string{}}
	number := 0
	for line := range strings.Lines(string(data)) {
		number++
		line, _, _ = strings.Cut(line, "#")
		words := strings.Fields(line)
		if len(words) == 0 {
			continue
		}
		for _, word := range words[1:] {
			pattern, ok := methodPattern(word)
			if !ok {
				return nil, accessFault(path, number, word)
			}
			a.allowed[words[0]] = append(a.allowed[words[0]], pattern)
		}
		if len(words) == 1 {
			return nil, accessFault(path, number, words[0])
		}
	}
	return a, nil
}

// methodPattern is the form in which a word is compared with methods.
func methodPattern(word string) (pattern string, ok bool) {
	if word == anyMethod {
		return anyMethod, true
	}
	service, method, whole := strings.Cut(word, "/")
	switch {
	case service == "" || strings.Contains(service, anyMethod) || strings.ContainsAny(method, "/*"):
		return "", false
	case !whole:
		return "/" + service + "/", true
	}
	return "/" + word, method != ""
}

// accessFault is the fault of a word of the file.
func accessFault(path string, line int, word string) error {
	e := fault.New(fault.Invalid, "access_file", word, accessForm)
	e.Op = fmt.Sprintf("%s: line %d", path, line)
	return e
}

// check returns nil if one of the names of a caller may call the method, else why not.
func (a *access) check(names []string, method string) error {
	if len(names) == 0 {
		return api.Refuse(api.CallerUnknown, "the caller shows no certificate with a URI or a DNS name")
	}
	service := method[:strings.LastIndexByte(method, '/')+1]
	for _, name := range names {
		for _, pattern := range a.allowed[name] {
			if slices.Contains([]string{anyMethod, method, service}, pattern) {
				return nil
			}
		}
	}
	return api.Refuse(api.CallerNotAllowed, "this caller may not call the method", "identity", names[0], "method", method)
}
