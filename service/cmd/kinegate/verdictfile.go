package main

import (
	"fmt"
	"math"
	"slices"
	"strings"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/eventfile"
	"example.org/kinegate/service/cmd/kinegate/internal/parquet"
)

// verdictFile writes one row per event or, where entries were asked for, one per entry.
type verdictFile struct {
	*outTable

	outline   []*kinegatev1.HypothesisOutline
	uncertain []bool // the hypotheses that report uncertainties
	// recorded are the observables of each hypothesis, in a file of events.
	recorded [][]recorded
	// row adds the rows of event i.
	row func(event *eventfile.Event, v *kinegate.Verdicts, i int) error
	// noun is what a row is of.
	noun string
}

// newVerdictFile opens the file of --out.
func (j *judgeRun) newVerdictFile() (*verdictFile, error) {
	f := &verdictFile{outline: j.checked.GetHypotheses()}
	for _, h := range j.checked.GetSelection().GetHypotheses() {
		f.uncertain = append(f.uncertain, h.GetRecordUncertainties())
	}
	columns := f.eventColumns()
	f.row, f.noun, f.recorded = f.eventRow, "event", recordedBy(f.outline)
	if j.entries != "" {
		columns, f.row, f.noun = f.entryColumns(), f.entryRows, "entry"
	}
	var err error
	f.outTable, err = newOutTable(j.outFile, columns)
	return f, err
}

// recordedBy are the observables of each hypothesis.
func recordedBy(outline []*kinegatev1.HypothesisOutline) [][]recorded {
	all := make([][]recorded, len(outline))
	for h, o := range outline {
		for k := range o.GetObservables() {
			index := slices.Repeat([]int{-1}, len(outline))
			index[h] = k
			all[h] = append(all[h], recorded{group: -1, index: index})
		}
	}
	return all
}

// Columns by the kind of their cells.
func wholeColumn(name string) parquet.Column {
	return parquet.Column{Name: name, Kind: parquet.Int64}
}
func doubleColumn(name string) parquet.Column {
	return parquet.Column{Name: name, Kind: parquet.Double}
}
func wordColumn(name string) parquet.Column { return parquet.Column{Name: name, Kind: parquet.Text} }

// headColumns are those of the event, in both forms.
func headColumns() []parquet.Column {
	return []parquet.Column{wholeColumn("run"), wholeColumn("event"), wordColumn("status"), wholeColumn("gate")}
}

func (f *verdictFile) head(event *eventfile.Event, v *kinegate.Verdicts, i int) {
	f.whole(event.Run)
	f.whole(event.ID)
	f.word(enumWord(v.Statuses[i], "EVENT_STATUS_"))
	f.bit(v.Gate(i))
}

func (f *verdictFile) bit(b bool) {
	if b {
		f.whole(1)
	} else {
		f.whole(0)
	}
}

func (f *verdictFile) eventColumns() []parquet.Column {
	columns := append(headColumns(), doubleColumn("weight"))
	for _, h := range f.outline {
		columns = append(columns, wholeColumn(h.GetName()))
		for _, o := range h.GetObservables() {
			columns = append(columns, doubleColumn(h.GetName()+"/"+o))
		}
	}
	return columns
}

func (f *verdictFile) eventRow(event *eventfile.Event, v *kinegate.Verdicts, i int) error {
	f.head(event, v, i)
	f.number(event.Weight)
	for h := range f.outline {
		f.bit(v.Accepted(h, i))
		for k := range f.recorded[h] {
			x, _ := f.recorded[h][k].value(v, i)
			f.number(x)
		}
	}
	return f.end()
}

func (f *verdictFile) entryColumns() []parquet.Column {
	columns := append(headColumns(), wordColumn("hypothesis"), wordColumn("entry_status"), wholeColumn("beam_candidate"),
		doubleColumn("beam_energy_gev"), doubleColumn("beam_time_ns"),
		doubleColumn("event_weight"), doubleColumn("window_weight"), doubleColumn("weight"),
		wholeColumn("assignment_count"), wordColumn("objects"),
		wordColumn("fit_status"), doubleColumn("chi_square"), wholeColumn("degrees_of_freedom"), doubleColumn("probability"))
	for h, o := range f.outline {
		for _, label := range o.GetObservables() {
			columns = append(columns, doubleColumn(o.GetName()+"/"+label))
			if f.uncertain[h] {
				columns = append(columns, doubleColumn(o.GetName()+"/"+label+"/uncertainty"))
			}
		}
	}
	return columns
}

func (f *verdictFile) entryRows(event *eventfile.Event, v *kinegate.Verdicts, i int) error {
	entries := v.Entries(i)
	for k := range entries {
		e := &entries[k]
		f.head(event, v, i)
		f.word(f.outline[e.Hypothesis].GetName())
		f.word(enumWord(e.Status, "ENTRY_STATUS_"))
		f.whole(int64(e.BeamRow))
		energy, time := math.NaN(), math.NaN()
		if e.BeamRow >= 0 && e.BeamRow < len(event.Beam) {
			energy, time = event.Beam[e.BeamRow].Energy, event.Beam[e.BeamRow].Time
		}
		for _, x := range []float64{energy, time, event.Weight, e.Weight, event.Weight * e.Weight} {
			f.number(x)
		}
		f.whole(int64(e.AssignmentCount))
		f.word(objectsText(f.outline[e.Hypothesis].GetProducts(), e.Assignment))
		f.fit(e.Fit)
		f.observables(e)
		if err := f.end(); err != nil {
			return err
		}
	}
	return nil
}

// fit adds the fit of an entry; without one it has no status.
func (f *verdictFile) fit(fit *kinegate.Fit) {
	if fit == nil || fit.Status == kinegatev1.FitStatus_FIT_STATUS_UNSPECIFIED {
		fit = &kinegate.Fit{ChiSquare: math.NaN(), Probability: math.NaN()}
		f.word("")
	} else {
		f.word(enumWord(fit.Status, "FIT_STATUS_"))
	}
	f.number(fit.ChiSquare)
	f.whole(int64(fit.DegreesOfFreedom))
	f.number(fit.Probability)
}

// observables adds what the entry records, under its own hypothesis.
func (f *verdictFile) observables(e *kinegate.Entry) {
	for h, o := range f.outline {
		for k := range o.GetObservables() {
			x, spread := math.NaN(), math.NaN()
			if h == e.Hypothesis {
				x = e.Observables[k]
			}
			if h == e.Hypothesis && f.uncertain[h] {
				spread = e.Uncertainties[k]
			}
			f.number(x)
			if f.uncertain[h] {
				f.number(spread)
			}
		}
	}
}

// objectsText says which object stands for which product, such as "p=0 gamma[0]=2".
func objectsText[I int16 | int32](products []string, objects []I) string {
	var parts []string
	for k, object := range objects {
		if object >= 0 {
			parts = append(parts, fmt.Sprintf("%s=%d", products[k], object))
		}
	}
	return strings.Join(parts, " ")
}

func (f *verdictFile) add(events []eventfile.Event, v *kinegate.Verdicts) error {
	for i := range events {
		if err := f.row(&events[i], v, i); err != nil {
			return err
		}
	}
	return nil
}

func (f *verdictFile) finish(e *environment) error {
	if err := f.close(); err != nil {
		return err
	}
	if !e.json {
		e.print("\n  %s written to %s, one per %s", plural(int64(f.rows), "row"), f.file.Name(), f.noun)
	}
	return nil
}
