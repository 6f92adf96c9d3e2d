package particle

import (
	_ "embed"
	"errors"
	"fmt"
	"maps"
	"slices"
	"strconv"

	"example.org/kinegate/kinematics/fault"
)

//go:embed particles.csv
var standard string

// Table is an immutable set of particles, safe for concurrent use.
type Table struct {
	particles []Particle // in the order of List
	byNumber  map[int64]int
	byName    map[string]int
	digest    string
	additions bool
}

// File is a particle file that adds particles to the table or overrides values of
// it. Its first line names its columns, any of
//
//	particle_number, nucleus_z, nucleus_a, name, aliases, anti_aliases,
//	mass_gev, mass_err_gev, width_gev, width_err_gev, mean_life_s, mean_life_err_s,
//	charge_thirds, J, P, C, antiparticle_number, source, not_breit_wigner
//
// A row whose number is in the table overrides the non-empty cells; any other row
// adds a particle, which needs a number (or nucleus_z and nucleus_a), aliases and a
// mass. Masses of nuclei are those of the bare nucleus. Antiparticles follow from
// their particle's row. A mean life is a number of seconds or the word stable.
type File struct {
	// Name stands in front of the file's faults.
	Name string
	// Data is the content, at most MaxFileBytes.
	Data []byte
}

// New returns the standard table with the files laid over it, one after the other.
// The error joins a fault.List for each faulty file; every fault has its line, column,
// field, value and what is allowed.
func New(files ...File) (*Table, error) {
	b := builder{rows: map[int64]*row{}, owner: map[string]int64{}}
	if err := b.add(File{Name: "standard particle table", Data: []byte(standard)}); err != nil {
		return nil, err
	}
	var errs []error
	for _, file := range files {
		if err := b.add(file); err != nil {
			errs = append(errs, err)
		}
	}
	if err := errors.Join(errs...); err != nil {
		return nil, err
	}
	return b.table(len(files) > 0), nil
}

// builder merges files into rows and the particles they make.
type builder struct {
	rows      map[int64]*row
	particles map[int64][]Particle
	owner     map[string]int64 // names taken, by the row's number
}

// add merges one file and checks every row that it touches.
func (b *builder) add(file File) error {
	rows, list := parse(file.Data)
	touched := map[int64]bool{}
	var order []int64
	for i := range rows {
		number, ok := rows[i].number(&list)
		if !ok {
			continue
		}
		if touched[number] {
			list = append(list, rows[i].fault(colNumber, "each particle once in a file"))
			continue
		}
		touched[number] = true
		order = append(order, number)
		if old := b.rows[number]; old != nil {
			merged := *old
			merged.merge(rows[i])
			b.rows[number] = &merged
		} else {
			b.rows[number] = &rows[i]
		}
	}
	if b.particles == nil {
		b.particles = map[int64][]Particle{}
	}
	for _, number := range order {
		made, faults := build(number, b.rows[number])
		list = append(list, faults...)
		b.particles[number] = made
	}
	list = append(list, b.claimNames(order)...)
	slices.SortStableFunc(list, func(x, y *fault.Error) int {
		if x.Line != y.Line {
			return x.Line - y.Line
		}
		return x.Column - y.Column
	})
	if err := list.Err(); err != nil {
		return fmt.Errorf("%s: %w", file.Name, err)
	}
	return nil
}

// claimNames gives the names of the rows of a file to their particles and reports
// names that are taken.
func (b *builder) claimNames(numbers []int64) fault.List {
	var list fault.List
	maps.DeleteFunc(b.owner, func(_ string, owner int64) bool { return slices.Contains(numbers, owner) })
	for _, number := range numbers {
		for _, p := range b.particles[number] {
			for _, name := range append([]string{p.Name}, p.aliases...) {
				if other, taken := b.owner[name]; taken {
					list = append(list, b.rows[number].fault(colAliases, "names that no other particle has").
						Because(strconv.Quote(name)+" is a name of particle "+strconv.FormatInt(other, 10)))
				}
				b.owner[name] = number
			}
		}
	}
	return list
}

// table sorts the particles and indexes them.
func (b *builder) table(additions bool) *Table {
	t := &Table{byNumber: map[int64]int{}, byName: map[string]int{}, additions: additions}
	for _, number := range slices.Sorted(maps.Keys(b.particles)) { // positive: antiparticles are made from rows
		t.particles = append(t.particles, b.particles[number]...)
	}
	for i, p := range t.particles {
		t.byNumber[p.Number] = i
		t.byName[p.Name] = i
		for _, alias := range p.aliases {
			t.byName[alias] = i
		}
	}
	markStrongStable(t.particles)
	t.digest = digest(t.particles)
	return t
}

// List returns all particles by the magnitude of their number, each particle before
// its antiparticle.
func (t *Table) List() []Particle { return slices.Clone(t.particles) }

// Len returns how many particles the table has, antiparticles included.
func (t *Table) Len() int { return len(t.particles) }

// Named returns the particle with the name or alias. The error is a fault.Error of
// kind NotFound with the nearest names.
func (t *Table) Named(name string) (Particle, error) {
	if i, ok := t.byName[name]; ok {
		return t.particles[i], nil
	}
	e := fault.New(fault.NotFound, "particle", name, "").In("particle.Named").Because("unknown particle")
	e.Nearest = t.Nearest(name)
	return Particle{}, e
}

// Numbered returns the particle with the particle number. The error is a fault.Error
// of kind NotFound.
func (t *Table) Numbered(number int64) (Particle, error) {
	if i, ok := t.byNumber[number]; ok {
		return t.particles[i], nil
	}
	return Particle{}, fault.New(fault.NotFound, "particle_number", strconv.FormatInt(number, 10), "").
		In("particle.Numbered").Because("unknown particle number")
}

// Lookup returns the particle with the name, alias or decimal particle number.
func (t *Table) Lookup(text string) (Particle, error) {
	if number, err := strconv.ParseInt(text, 10, 64); err == nil {
		return t.Numbered(number)
	}
	return t.Named(text)
}

// Conjugate returns the antiparticle of p, which is p itself if p is self-conjugate.
func (t *Table) Conjugate(p Particle) (Particle, error) { return t.Numbered(p.AntiNumber) }
