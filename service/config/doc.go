// Package config finds the values of the server's settings. A flag wins over a
// variable of the environment, that over the file, and that over the default; every
// value remembers where it came from. All faults are reported at once, and names that
// are no settings are faults wherever they stand.
package config
