package kinegatev1_test

import (
	"fmt"
	"regexp"
	"slices"
	"strings"
	"testing"

	"google.golang.org/protobuf/reflect/protodesc"
	"google.golang.org/protobuf/reflect/protoreflect"
	"google.golang.org/protobuf/reflect/protoregistry"
	"google.golang.org/protobuf/types/descriptorpb"

	_ "example.org/kinegate/proto/kinegate/v1"
)

// unitSuffixes lists the units that a field's name may end in.
var unitSuffixes = []string{
	"_gev", "_gev2", "_rad", "_m", "_m2", "_mm", "_s", "_ns", "_hz", "_barn", "_k", "_gv", "_per_m", "_kpc",
	"_per_sr", "_per_m3",
}

// withoutUnit lists the doubles and the bytes that carry no unit, by message and field, each
// with the reason.
var withoutUnit = map[string]string{
	"AnnihilationAngle.cosine":                      "a cosine",
	"AnnihilationAnswer.beta":                       "speed over the speed of light",
	"AzimuthTable.densities":                        "densities in any unit",
	"BackscatterAngle.fraction_within":              "a share of the photons",
	"BackscatterAnswer.relative_excess":             "s over the square of the mass, minus 1",
	"BackscatterAnswer.window_fractions":            "shares of the photons",
	"BackscatterPoint.circular_degree":              "degree in [-1, 1]",
	"BackscatterPoint.linear_degree":                "degree in [0, 1]",
	"BackscatterPolarisation.beam_degree":           "degree in [-1, 1]",
	"BackscatterPolarisation.circular_degree":       "degree in [-1, 1]",
	"BackscatterPolarisation.linear_degree":         "degree in [0, 1]",
	"BeamPolarisation.circular_degree":              "degree in [-1, 1]",
	"BeamPolarisation.linear_degree":                "degree in [0, 1]",
	"BeamColumns.offsets":                           "int32 rows",
	"BlackBodyField.redshift":                       "a redshift",
	"Calorimeter.constant":                          "a relative resolution",
	"Calorimeter.efficiency":                        "a probability",
	"Calorimeter.stochastic":                        "square roots of GeV",
	"CentreOfMass.beta":                             "speed over the speed of light",
	"CentreOfMass.gamma":                            "energy over mass",
	"CherenkovLight.refractive_index":               "speed of light in vacuum over that in the medium",
	"CherenkovLight.threshold_beta":                 "speed over the speed of light",
	"ClusterNoise.probability":                      "a probability",
	"ComptonAnswer.rest_energy_ratio":               "energy over mass",
	"ComptonPoint.rest_frame_cosine":                "a cosine",
	"ConvertMotionRequest.beta":                     "speed over the speed of light",
	"ConvertMotionRequest.gamma":                    "energy over mass",
	"ConvertMotionRequest.refractive_indices":       "speeds of light in vacuum over those in media",
	"ConvertMotionResponse.beta":                    "speed over the speed of light",
	"ConvertMotionResponse.beta_gamma":              "momentum over mass",
	"ConvertMotionResponse.gamma":                   "energy over mass",
	"ConvertMotionResponse.gamma_minus_one":         "kinetic energy over mass",
	"ConvertMotionResponse.one_minus_beta":          "speed lacking over the speed of light",
	"CosineTable.cosines":                           "cosines",
	"CosineTable.densities":                         "densities in any unit",
	"CovarianceColumn.elements":                     "float64; each element has the product of two parameters' units",
	"DalitzTerm.coefficient":                        "a pure number",
	"DecayMotion.rest_frame_per_laboratory":         "a ratio of solid angles",
	"DecayOptions.branching_fraction":               "a share of the decays",
	"DescribeDecayRequest.rest_frame_cosines":       "cosines",
	"DescribeDecayResponse.decaying_fractions":      "shares of the particles",
	"DescribeDecayResponse.surviving_fractions":     "shares of the particles",
	"DirectionDetector.efficiency":                  "a probability",
	"DisplacedVertexDetector.efficiency":            "probability in [0, 1]",
	"EnergyTable.rates":                             "rates in any unit",
	"EntryColumns.assignment_offsets":               "int32 rows",
	"EntryColumns.assignments":                      "int16 objects of the event",
	"EntryColumns.beam_rows":                        "int16 rows",
	"EntryColumns.hypothesis_indices":               "int16 positions in the selection",
	"AssignmentExplanation.rank_distance":           "squares of distances over their scales",
	"AssignmentExplanation.weight":                  "weight of a beam candidate",
	"ConstraintExplanation.after":                   "in the unit that stands beside it",
	"ConstraintExplanation.before":                  "in the unit that stands beside it",
	"EntryColumns.observable_offsets":               "int32 rows",
	"EntryColumns.observable_uncertainties":         "float64, each in the unit of the observable",
	"EntryColumns.observables":                      "float64, each in the unit of the observable that the opening named",
	"EntryColumns.offsets":                          "int32 rows",
	"EntryColumns.statuses":                         "uint8 statuses",
	"EntryColumns.weights":                          "float64 weights of beam candidates",
	"EventBlock.event_ids":                          "int64 numbers of the caller",
	"EventBlock.object_classes":                     "uint8 classes",
	"EventBlock.object_offsets":                     "int32 rows",
	"FitColumns.chi_squares":                        "float64 chi-squares",
	"FitColumns.degrees_of_freedom":                 "int16 numbers",
	"FitColumns.probabilities":                      "float64 probabilities",
	"FitColumns.statuses":                           "uint8 statuses",
	"FitExplanation.chi_square":                     "a chi-square",
	"FitExplanation.probability":                    "a probability",
	"FitProbabilityWindow.max":                      "a probability",
	"FitProbabilityWindow.min":                      "a probability",
	"FittedParameter.fitted":                        "in the unit that stands beside it",
	"FittedParameter.measured":                      "in the unit that stands beside it",
	"FittedParameter.pull":                          "a distance in standard deviations",
	"FittedParameter.uncertainty":                   "in the unit that stands beside it",
	"FluxHistogram.contents":                        "fluxes in any unit",
	"GenerationChannel.bound":                       "a fraction of the largest weight",
	"GenerationChannel.fraction":                    "a share of the events",
	"GenerationOutline.branching_fraction":          "a share of the decays",
	"GenerationSummary.effective_event_count":       "a number of events that is not whole",
	"GenerationSummary.efficiency":                  "events over draws",
	"GenerationSummary.largest_weight":              "a weight",
	"GenerationSummary.weight_sum":                  "a sum of weights",
	"GroupBest.best":                                "int16 positions in the selection",
	"HelicityAngle.cosine":                          "a cosine",
	"HelicityMean.equal":                            "a mean of a pure number",
	"HelicityMean.opposite":                         "a mean of a pure number",
	"HelicityMean.unpolarised":                      "a mean of a pure number",
	"HypothesisBits.accepted":                       "bits, one per event",
	"MeasureBoundResponse.largest":                  "a fraction of the largest weight",
	"MeasureBoundResponse.mean":                     "a fraction of the largest weight",
	"MeasuredMaskColumn.masks":                      "uint8 bits",
	"MomentumSlopesColumns.slope_x":                 "float64 px over pz",
	"MomentumSlopesColumns.slope_y":                 "float64 py over pz",
	"OpeningAngleDensity.fraction_below":            "share of the decays",
	"PairAnnihilation.cosines":                      "cosines",
	"PairAnnihilation.max_cosine":                   "a cosine",
	"PairCreation.cosines":                          "cosines",
	"PairCreation.max_cosine":                       "a cosine",
	"PairCreation.relative_excess":                  "s over the square of the pair's mass, minus 1",
	"PairCreationAnswer.beta":                       "speed over the speed of light",
	"PairCreationAnswer.relative_excess":            "s over the square of the pair's mass, minus 1",
	"PairCreationPeak.beta":                         "speed over the speed of light",
	"ParentMotion.beta":                             "speed over the speed of light",
	"ParentMotion.gamma":                            "energy over mass",
	"PhaseSpaceVolume.volume":                       "GeV to a power that stands beside it",
	"PhotonAbsorption.optical_depth":                "a pure number",
	"PolarisationColumns.circular_degree":           "float64 degree in [-1, 1]",
	"PolarisationColumns.linear_degree":             "float64 degree in [0, 1]",
	"PowerLawField.index":                           "an exponent",
	"ProductionAngle.beam_asymmetry":                "asymmetry in [-1, 1]",
	"SolveTwoBodyRequest.centre_of_mass_cosines":    "cosines",
	"SpeciesConfusion.probability":                  "a probability",
	"SpeciesMaskColumn.masks":                       "uint8 bits",
	"SplitOff.max_share":                            "a share of an energy",
	"SplitOff.min_share":                            "a share of an energy",
	"SplitOff.probability":                          "a probability",
	"TimeWindow.weight":                             "weight of a beam candidate",
	"TraceDalitzBoundaryRequest.resolution":         "a fraction of the extent of the region",
	"Tracker.constant":                              "a relative resolution",
	"Tracker.efficiency":                            "a probability",
	"TransverseMomentumColumns.pseudorapidity":      "float64, a logarithm of an angle's tangent",
	"TruthColumns.beam_offsets":                     "int32 rows",
	"TruthColumns.channels":                         "int16 positions in the generation",
	"TruthColumns.decayed":                          "uint8 truth values",
	"TruthColumns.event_ids":                        "int64 numbers of events",
	"TruthColumns.object_particles":                 "int16 rows of the event",
	"TruthColumns.parents":                          "int16 rows of the event",
	"TruthColumns.particle_numbers":                 "int64 Monte Carlo particle numbers",
	"TruthColumns.particle_offsets":                 "int32 rows",
	"TruthColumns.weights":                          "float64 weights",
	"TwoBodyOutgoing.centre_of_mass_cosine":         "a cosine",
	"TwoBodyOutgoing.centre_of_mass_per_laboratory": "a ratio of solid angles",
	"TwoBodyOutgoing.laboratory_per_centre_of_mass": "a ratio of solid angles",
	"VerdictBlock.gate":                             "bits, one per event",
	"VerdictBlock.statuses":                         "uint8 statuses",
	"VertexGroupColumns.groups":                     "int32 numbers of groups",
	"VertexGroupColumns.offsets":                    "int32 rows",
	"WeightColumn.weights":                          "float64 weights",
	"WindowExplanation.above_min":                   "in the unit that stands beside it",
	"WindowExplanation.below_max":                   "in the unit that stands beside it",
	"WindowExplanation.uncertainty":                 "in the unit that stands beside it",
	"WindowExplanation.value":                       "in the unit that stands beside it",
}

// wholeNumbers lists the integers whose names look like counts and are none, with the reason.
var wholeNumbers = map[string]string{
	"ConvertMotionRequest.charge_thirds":      "a charge in thirds of the elementary charge",
	"ConvertMotionResponse.charge_thirds":     "a charge in thirds of the elementary charge",
	"InclusiveRemainder.charge_thirds":        "a charge in thirds of the elementary charge",
	"Particle.charge_thirds":                  "a charge in thirds of the elementary charge",
	"InclusiveRemainder.baryon_number_thirds": "a baryon number in thirds",
	"Particle.baryon_number_thirds":           "a baryon number in thirds",
}

// collective lists the repeated fields whose names are no plurals, with the reason.
var collective = map[string]string{
	"SolveTwoBodyRequest.laboratory_momenta_gev": "momenta, the plural of momentum",
	"Condition.all_of":                           "reads as the sentence it is",
	"Condition.any_of":                           "reads as the sentence it is",
	"Condition.none_of":                          "reads as the sentence it is",
	"CoplanarityWindow.first":                    "the products of the first side",
	"CoplanarityWindow.second":                   "the products of the second side",
	"FitEqualMasses.first":                       "the products of the first sum",
	"FitEqualMasses.second":                      "the products of the second sum",
	"Hypothesis.record":                          "what each verdict keeps a record of",
	"InclusiveRemainder.lightest":                "the lightest final state that fits",
	"Reaction.initial":                           "the initial state, one particle or two",
}

// keywords are those of Python and C++: a field of such a name is out of reach, or gets another
// name, in the stubs. Those of Go do no harm, for its names begin with capitals.
var keywords = strings.Fields(`
	False None True and as assert async await break class continue def del elif else except finally for
	from global if import in is lambda nonlocal not or pass raise return try while with yield

	alignas alignof and_eq asm auto bitand bitor bool case catch char char8_t char16_t char32_t compl concept
	const consteval constexpr constinit const_cast co_await co_return co_yield decltype default delete do
	double dynamic_cast enum explicit export extern false float friend goto inline int long mutable namespace
	new noexcept not_eq nullptr operator or_eq private protected public register reinterpret_cast requires
	short signed sizeof static static_assert static_cast struct switch template this thread_local throw true
	typedef typeid typename union unsigned using virtual void volatile wchar_t xor xor_eq`)

var (
	digitWord = regexp.MustCompile(`(^|_)[0-9]`)
	countName = regexp.MustCompile(`^(n|num|number_of)_|[^s]s$`)
)

// contract is the rules with their lists, so that the self-test can bring its own.
type contract struct {
	withoutUnit, wholeNumbers, collective map[string]string
	used                                  map[string]bool
}

// listed tells whether a list excuses a field, and notes that it did.
func (c *contract) listed(list map[string]string, key string) bool {
	_, ok := list[key]
	c.used[key] = c.used[key] || ok

	return ok
}

// cutUnit splits a unit off a field's name.
func cutUnit(name string) (base string, ok bool) {
	for _, suffix := range unitSuffixes {
		if base, ok = strings.CutSuffix(name, suffix); ok {
			return base, true
		}
	}

	return name, false
}

// field returns what is wrong with one field.
func (c *contract) field(field protoreflect.FieldDescriptor) []string {
	name := string(field.Name())
	key := string(field.Parent().Name()) + "." + name
	base, hasUnit := cutUnit(name)

	var faults []string

	add := func(text string) { faults = append(faults, key+" "+text) }

	switch field.Kind() {
	case protoreflect.BytesKind:
		// A column of counts says so, like a single one.
		if !hasUnit && !strings.HasSuffix(name, "_counts") && !c.listed(c.withoutUnit, key) {
			add("ends in no unit and stands in no list")
		}
	case protoreflect.DoubleKind:
		if !hasUnit && !c.listed(c.withoutUnit, key) {
			add("ends in no unit and stands in no list")
		}
	case protoreflect.FloatKind:
		add("is a float of 32 bits")
	case protoreflect.Uint32Kind, protoreflect.Uint64Kind, protoreflect.Fixed32Kind, protoreflect.Fixed64Kind:
		add("is unsigned")
	case protoreflect.Int32Kind, protoreflect.Int64Kind:
		if !field.IsList() && countName.MatchString(name) && !hasUnit && !c.listed(c.wholeNumbers, key) {
			add("is a count and does not end in _count")
		}

		if strings.HasSuffix(name, "_count") && field.Kind() != protoreflect.Int64Kind {
			add("is a count of 32 bits")
		}
	case protoreflect.BoolKind, protoreflect.EnumKind, protoreflect.StringKind, protoreflect.MessageKind,
		protoreflect.GroupKind, protoreflect.Sint32Kind, protoreflect.Sint64Kind, protoreflect.Sfixed32Kind,
		protoreflect.Sfixed64Kind:
	}

	if field.IsList() && !strings.HasSuffix(base, "s") && !c.listed(c.collective, key) {
		add("is repeated and no plural")
	}

	if digitWord.MatchString(name) {
		add("has a word that starts with a digit")
	}

	if slices.Contains(keywords, name) {
		add("is a keyword of Python or C++")
	}

	return faults
}

// enums returns what is wrong with the values of enums.
func enums(all protoreflect.EnumDescriptors) (faults []string) {
	for i := range all.Len() {
		values := all.Get(i).Values()
		for j := range values.Len() {
			if name := values.Get(j).Name(); slices.Contains(keywords, string(name)) {
				faults = append(faults, string(all.Get(i).Name())+"."+string(name)+" is a keyword of Python or C++")
			}
		}
	}

	return faults
}

// messages returns what is wrong with the messages and all that they contain, and the number of fields.
func (c *contract) messages(all protoreflect.MessageDescriptors) (faults []string, fields int) {
	for i := range all.Len() {
		message := all.Get(i)
		for j := range message.Fields().Len() {
			fields++

			faults = append(faults, c.field(message.Fields().Get(j))...)
		}

		inner, count := c.messages(message.Messages())
		faults = append(faults, slices.Concat(inner, enums(message.Enums()))...)
		fields += count
	}

	return faults, fields
}

func TestContractNames(t *testing.T) {
	t.Parallel()

	rules := contract{withoutUnit, wholeNumbers, collective, map[string]bool{}}
	fields := 0

	protoregistry.GlobalFiles.RangeFilesByPackage("kinegate.v1", func(file protoreflect.FileDescriptor) bool {
		faults, count := rules.messages(file.Messages())
		for _, fault := range slices.Concat(faults, enums(file.Enums())) {
			t.Errorf("%s: %s", file.Path(), fault)
		}

		fields += count

		return true
	})

	if fields == 0 {
		t.Fatal("no field was found")
	}

	for _, list := range []map[string]string{withoutUnit, wholeNumbers, collective} {
		for key := range list {
			if !rules.used[key] {
				t.Errorf("%s stands in a list and needs no excuse", key)
			}
		}
	}

	t.Logf("%d fields", fields)
}

// seededFile describes a file of one message whose fields are given as text: label, type, name.
func seededFile(t *testing.T, fields ...string) protoreflect.FileDescriptor {
	t.Helper()

	message := &descriptorpb.DescriptorProto{Name: new("Seeded")}

	for i, text := range fields {
		part := strings.Fields(text)

		kind, ok := descriptorpb.FieldDescriptorProto_Type_value["TYPE_"+strings.ToUpper(part[1])]
		if !ok {
			t.Fatalf("no type %q", part[1])
		}

		label := descriptorpb.FieldDescriptorProto_LABEL_OPTIONAL
		if part[0] == "repeated" {
			label = descriptorpb.FieldDescriptorProto_LABEL_REPEATED
		}

		message.Field = append(message.Field, &descriptorpb.FieldDescriptorProto{
			Name:   new(part[2]),
			Number: new(int32(i + 1)),
			Type:   descriptorpb.FieldDescriptorProto_Type(kind).Enum(),
			Label:  label.Enum(),
		})
	}

	file, err := protodesc.NewFile(&descriptorpb.FileDescriptorProto{
		Name:        new("seeded.proto"),
		Package:     new("seeded.v1"),
		Syntax:      new("proto3"),
		MessageType: []*descriptorpb.DescriptorProto{message},
		EnumType: []*descriptorpb.EnumDescriptorProto{{
			Name: new("Answer"),
			Value: []*descriptorpb.EnumValueDescriptorProto{
				{Name: new("UNSURE"), Number: new(int32(0))}, {Name: new("None"), Number: new(int32(1))},
			},
		}},
	}, nil)
	if err != nil {
		t.Fatal(err)
	}

	return file
}

func TestContractNamesSeeOffences(t *testing.T) {
	t.Parallel()

	bad := []string{
		"single double mass", "single double energy_mev", "single bytes momentum", "single float width_gev",
		"single uint32 row", "single uint64 id", "single fixed32 word", "single int64 events", "single int32 num_events",
		"single int32 n_photons", "single int32 draw_count", "single bytes tries", "repeated double length_m", "repeated string product",
		"single string pair_4momentum", "single string from", "single bool not", "single string inline",
	}

	good := []string{
		"single double mass_gev", "single bytes momentum_gev", "single bytes try_counts", "single double share", "single int64 event_count",
		"single int32 charge_thirds", "repeated double energies_gev", "repeated string products", "repeated string all_of",
		"single int64 sequence", "single int64 budget_ns", "single string energy4", "single bool is_open",
	}

	rules := contract{
		withoutUnit:  map[string]string{"Seeded.share": "a fraction"},
		wholeNumbers: map[string]string{"Seeded.charge_thirds": "a charge"},
		collective:   map[string]string{"Seeded.all_of": "a sentence"},
		used:         map[string]bool{},
	}

	seeded := seededFile(t, slices.Concat(bad, good)...)
	faults, fields := rules.messages(seeded.Messages())

	if fields != len(bad)+len(good) {
		t.Errorf("%d fields were read, want %d", fields, len(bad)+len(good))
	}

	if found := enums(seeded.Enums()); !slices.Equal(found, []string{"Answer.None is a keyword of Python or C++"}) {
		t.Errorf("of an enum with a value that is a keyword: %q", found)
	}

	all := strings.Join(faults, "\n") + "\n"

	for _, text := range bad {
		if name := strings.Fields(text)[2]; !strings.Contains(all, fmt.Sprintf("Seeded.%s ", name)) {
			t.Errorf("%q was not seen", text)
		}
	}

	for _, text := range good {
		if name := strings.Fields(text)[2]; strings.Contains(all, fmt.Sprintf("Seeded.%s ", name)) {
			t.Errorf("%q was reported: %s", text, all)
		}
	}
}
