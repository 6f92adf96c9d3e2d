package main

import (
	"bufio"
	"errors"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"

	"google.golang.org/protobuf/encoding/protodelim"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/eventfile"
	"example.org/kinegate/service/cmd/kinegate/internal/parquet"
)

// eventSink keeps simulated events in a file.
type eventSink interface {
	add(header *kinegatev1.GenerationHeader, block *kinegatev1.GeneratedBlock, events []simulated) error
	// finish writes what is left.
	finish() error
	// abandon removes what is only kept for the end; after finish too.
	abandon()
}

// newEventSink opens a file by its extension; nil for no name.
func newEventSink(name string) (eventSink, error) {
	if name == "" {
		return nil, nil //nolint:nilnil // no file is wanted
	}
	extension := strings.ToLower(filepath.Ext(name))
	switch extension {
	case ".csv", ".parquet", ".kgb":
	default:
		return nil, badInput("--out %q: names end in .csv, .parquet or .kgb", name)
	}
	table, err := particle.New()
	if err != nil {
		return nil, err
	}
	file, err := os.Create(name)
	if err != nil {
		return nil, badInput("--out: %w", err)
	}
	return openSink(extension, file, table)
}

func openSink(extension string, file *os.File, table *particle.Table) (eventSink, error) {
	f := outFile{file: file, buffer: bufio.NewWriter(file), charges: chargesOf(table)}
	switch extension {
	case ".csv":
		spool, err := eventfile.NewSpool()
		return &csvSink{outFile: f, spool: spool}, err
	case ".kgb":
		return &blockSink{outFile: f}, nil
	}
	return newParquetSink(f)
}

// outFile is the file of a sink.
type outFile struct {
	file    *os.File
	buffer  *bufio.Writer
	charges map[int64]int
}

func (f *outFile) abandon() {}

func (f *outFile) close() error { return errors.Join(f.buffer.Flush(), f.file.Close()) }

// chargesOf is the charges of all particles in thirds.
func chargesOf(table *particle.Table) map[int64]int {
	charges := map[int64]int{}
	for _, p := range table.List() {
		charges[p.Number] = p.ChargeThirds()
	}
	return charges
}

// objects are the objects of an event: as they were measured or, without a detector, the
// true particles that would reach one, in momentum and mass. Neutrinos leave no object.
func (f *outFile) objects(e *simulated) ([]kinegate.Object, []kinegate.BeamCandidate) {
	if e.seen != nil {
		return e.seen.Objects, e.seen.Beam
	}
	var objects []kinegate.Object
	for i := range e.particles {
		p := &e.particles[i]
		class := kinegatev1.ObjectClass_OBJECT_CLASS_NEUTRAL
		switch charge := f.charges[p.number]; {
		case p.decayed || isNeutrino(p.number):
			continue
		case p.number == 22:
			class = kinegatev1.ObjectClass_OBJECT_CLASS_PHOTON
		case charge > 0:
			class = kinegatev1.ObjectClass_OBJECT_CLASS_POSITIVE
		case charge < 0:
			class = kinegatev1.ObjectClass_OBJECT_CLASS_NEGATIVE
		}
		objects = append(objects, kinegate.Object{Values: [4]float64{p.px, p.py, p.pz, p.mass}, Class: class})
	}
	var beam []kinegate.BeamCandidate
	if e.beam > 0 {
		beam = []kinegate.BeamCandidate{{Energy: e.beam}}
	}
	return objects, beam
}

func isNeutrino(number int64) bool {
	switch max(number, -number) {
	case 12, 14, 16:
		return true
	}
	return false
}

// csvSink keeps events in a temporary file for the end: the number of columns depends on
// all of them.
type csvSink struct {
	outFile

	coordinates kinegate.Coordinates
	spool       *eventfile.Spool
	digest      string
}

func (s *csvSink) add(header *kinegatev1.GenerationHeader, _ *kinegatev1.GeneratedBlock, events []simulated) error {
	s.digest = header.GetGenerationDigest()
	for i := range events {
		e := &events[i]
		s.coordinates = kinegate.MomentumMass
		if e.seen != nil {
			s.coordinates = kinegate.MomentumAngles
		}
		objects, beam := s.objects(e)
		if err := s.spool.Add(&eventfile.Event{ID: e.id, Objects: objects, Beam: beam, Other: map[string]string{
			"channel": header.GetChannels()[e.channel].GetName(), "weight": strconv.FormatFloat(e.weight, 'g', -1, 64),
		}}); err != nil {
			return err
		}
	}
	return nil
}

func (s *csvSink) finish() error {
	comment := "Simulated events, sample " + s.digest + "."
	return errors.Join(s.spool.Write(s.buffer, comment, s.coordinates), s.close())
}

func (s *csvSink) abandon() { _ = s.spool.Close() }

// blockSink writes the event blocks themselves, each behind its length as a varint.
type blockSink struct{ outFile }

func (s *blockSink) add(_ *kinegatev1.GenerationHeader, block *kinegatev1.GeneratedBlock, events []simulated) error {
	m := block.GetEvents()
	if m == nil {
		b := kinegate.NewBuilder(kinegate.MomentumMass)
		for i := range events {
			objects, beam := s.objects(&events[i])
			b.Add(events[i].id, objects, beam)
		}
		m = b.Take()
	}
	m.Weight = weightsOf(events)
	_, err := protodelim.MarshalTo(s.buffer, m)
	return err
}

// weightsOf is the column of the weights of events; nil where all are 1.
func weightsOf(events []simulated) *kinegatev1.WeightColumn {
	if !slices.ContainsFunc(events, func(e simulated) bool { return e.weight != 1 }) {
		return nil
	}
	weights := make([]float64, len(events))
	for i := range events {
		weights[i] = events[i].weight
	}
	return &kinegatev1.WeightColumn{Weights: column.Float64(weights)}
}

func (s *blockSink) finish() error { return s.close() }

// parquetSink writes one row an event: lists of its true particles and measured objects.
type parquetSink struct {
	outFile

	writer *parquet.Writer
}

// Columns of the Parquet file.
const (
	columnEvent = iota
	columnChannel
	columnWeight
	columnBeam
	columnNumber
	columnParticle // energy, px, py, pz, mass
)

// Those behind the five numbers of a particle.
const (
	columnDecayed  = columnParticle + 5
	columnClass    = columnDecayed + 1
	columnObject   = columnClass + 1 // momentum, theta, phi
	columnMeasured = columnObject + 3
	columnTagged   = columnMeasured + 1 // energy, sigma, time
)

func newParquetSink(f outFile) (*parquetSink, error) {
	columns := []parquet.Column{
		{Name: "event", Kind: parquet.Int64}, {Name: "channel", Kind: parquet.Text}, {Name: "weight", Kind: parquet.Double},
		{Name: "beam_energy_gev", Kind: parquet.Double}, {Name: "particle_number", Kind: parquet.Int64, List: true},
	}
	for _, name := range []string{"energy_gev", "px_gev", "py_gev", "pz_gev", "mass_gev"} {
		columns = append(columns, parquet.Column{Name: "particle_" + name, Kind: parquet.Double, List: true})
	}
	columns = append(columns, parquet.Column{Name: "particle_decayed", Kind: parquet.Int64, List: true},
		parquet.Column{Name: "object_class", Kind: parquet.Text, List: true})
	for _, name := range []string{"momentum_gev", "theta_rad", "phi_rad"} {
		columns = append(columns, parquet.Column{Name: "object_" + name, Kind: parquet.Double, List: true})
	}
	columns = append(columns, parquet.Column{Name: "object_measured_mask", Kind: parquet.Int64, List: true})
	for _, name := range []string{"energy_gev", "sigma_gev", "time_ns"} {
		columns = append(columns, parquet.Column{Name: "tagged_" + name, Kind: parquet.Double, List: true})
	}
	s := &parquetSink{outFile: f}
	var err error
	s.writer, err = parquet.NewWriter(f.buffer, columns)
	return s, err
}

func (s *parquetSink) add(header *kinegatev1.GenerationHeader, _ *kinegatev1.GeneratedBlock, events []simulated) error {
	w := s.writer
	doubles := func(column int, values ...float64) {
		for i, x := range values {
			w.Double(column+i, x)
		}
	}
	for k := range events {
		e := &events[k]
		w.Int64(columnEvent, e.id)
		w.Text(columnChannel, header.GetChannels()[e.channel].GetName())
		doubles(columnWeight, e.weight, e.beam)
		for i := range e.particles {
			p := &e.particles[i]
			w.Int64(columnNumber, p.number)
			doubles(columnParticle, p.energy, p.px, p.py, p.pz, p.mass)
			decayed := int64(0)
			if p.decayed {
				decayed = 1
			}
			w.Int64(columnDecayed, decayed)
		}
		if e.seen != nil {
			for _, o := range e.seen.Objects {
				w.Text(columnClass, enumWord(o.Class, "OBJECT_CLASS_"))
				doubles(columnObject, o.Values[0], o.Values[1], o.Values[2])
				w.Int64(columnMeasured, int64(o.Measured))
			}
			for _, b := range e.seen.Beam {
				doubles(columnTagged, b.Energy, b.Sigma, b.Time)
			}
		}
		if err := w.EndRow(); err != nil {
			return err
		}
	}
	return nil
}

func (s *parquetSink) finish() error {
	return errors.Join(s.writer.Close("kinegate "+version()), s.close())
}
