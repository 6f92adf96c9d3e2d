package config

import (
	"slices"
	"strings"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/service/server"
)

// Prefix starts the names of the environment's variables.
const Prefix = "KINEGATE_"

// FileKey is the name of the one setting that is no setting of the server: the file.
// It comes from the flag --config or the variable KINEGATE_CONFIG.
const FileKey = "config"

// Sources are where values come from.
type Sources struct {
	// Flags are the flags that were given, by the name of their setting.
	Flags map[string]string
	// Environ are lines of the form name=value; those that do not start with Prefix
	// are not looked at.
	Environ []string
	// ReadFile reads the file; it is called only when a file is named.
	ReadFile func(path string) ([]byte, error)
}

// Origin says where a value came from.
type Origin string

// The origins, the weakest first.
const (
	Default     Origin = "default"
	File        Origin = "file"
	Environment Origin = "environment"
	Flag        Origin = "flag"
)

// Effective is the value of one setting.
type Effective struct {
	// Setting is the setting.
	Setting server.Setting
	// Value is its value as it would be typed.
	Value string
	// Origin is where it came from.
	Origin Origin
	// Place is the flag, the variable, or the line of the file.
	Place string
}

// Load returns the options and where each value came from. The options are checked;
// the error is a fault.List of everything that is wrong, and the rest is then what
// could be read.
func Load(s Sources) (server.Options, []Effective, error) {
	l := loader{options: server.Defaults(), at: map[string]int{}}
	for _, setting := range server.Settings() {
		l.at[setting.Name] = len(l.all)
		l.all = append(l.all, Effective{setting, setting.Default, Default, ""})
	}
	variables := l.variables(s.Environ)
	path, named := s.Flags[FileKey]
	if !named {
		path = variables[FileKey].value
	}
	if path != "" {
		l.file(path, s.ReadFile)
	}
	for name, v := range sorted(variables) {
		if name != FileKey {
			l.set(name, v.value, Environment, v.place)
		}
	}
	for name, value := range sorted(s.Flags) {
		if name != FileKey {
			l.set(name, value, Flag, FlagName(name))
		}
	}
	l.check()
	return l.options, l.all, l.faults.Err()
}

// FlagName is the flag of a setting.
func FlagName(setting string) string { return "--" + strings.ReplaceAll(setting, "_", "-") }

// VariableName is the variable of a setting.
func VariableName(setting string) string { return Prefix + strings.ToUpper(setting) }

// loader gathers values and faults.
type loader struct {
	options server.Options
	all     []Effective
	at      map[string]int // index in all by name
	bad     []string       // settings that have a fault already
	faults  fault.List
}

// set takes a value over a weaker one.
func (l *loader) set(name, value string, origin Origin, place string) {
	i, ok := l.at[name]
	if !ok {
		l.fault(name, place, fault.New(fault.NotFound, name, value, "a name listed by serve --print-config").
			Because("there is no such setting"))
		return
	}
	in := l.all[i].Setting.In(&l.options)
	e := in.Set(value)
	if e == nil {
		e = in.Check()
	}
	if e != nil {
		l.fault(name, place, e)
		return
	}
	l.all[i].Value, l.all[i].Origin, l.all[i].Place = in.String(), origin, place
}

// fault adds a fault with its place in front.
func (l *loader) fault(name, place string, e *fault.Error) {
	e.Field = name
	if place != "" {
		e.Op = place
	}
	l.bad = append(l.bad, name)
	l.faults = append(l.faults, e)
}

// check adds what is wrong with the options as a whole, for settings that have no
// fault already.
func (l *loader) check() {
	err := l.options.Validate()
	list, ok := err.(fault.List) //nolint:errorlint // Validate returns nothing else
	if !ok {
		return
	}
	for _, e := range list {
		if !slices.Contains(l.bad, e.Field) {
			l.faults = append(l.faults, e)
		}
	}
}
