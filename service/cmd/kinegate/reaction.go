package main

import (
	"context"
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// reactionCommand describes a reaction.
func reactionCommand(p program) *cobra.Command {
	e := newEnvironment(p)
	initial := &initialFlags{}
	extra := &reactionFlags{}
	c := &cobra.Command{
		Use:   "reaction TEXT",
		Short: "Say whether a channel is open and where its products go",
		Long: "reaction says whether a channel is open at an energy, how far above or below threshold\n" +
			"it is, and where each product can go. Without an energy it gives the threshold.\n" +
			"It exits with 0 if the channel can be reached, on a free or bound target, else with 3.",
		Example: `  kinegate reaction "gamma p -> K+ Lambda, Lambda -> p pi-" --beam "1.2 GeV"
  kinegate reaction "gamma gamma -> e+ e-" --beam "1.0 MeV" --beam2 "0.5 MeV" --angle "180 deg"
  kinegate reaction "gamma p -> p eta"
  kinegate reaction "gamma p -> p pi+ pi-" --beam "2 GeV" --t "beam, pi+ pi-" --volume
  kinegate reaction "gamma p -> p eta" --beam "680 MeV" --nucleus d --fermi "250 MeV"`,
		Args: usage(cobra.ExactArgs(1)),
		RunE: func(c *cobra.Command, args []string) error {
			request := &kinegatev1.DescribeReactionRequest{
				Form: &kinegatev1.DescribeReactionRequest_Reaction{Reaction: args[0]},
			}
			var err error
			if request.InitialState, err = initial.initialState(args[0]); err != nil {
				return err
			}
			if err := extra.read(request); err != nil {
				return err
			}
			return e.asking(c.Context(), args[0], func(ctx context.Context, client *kinegate.Client) error {
				reply, err := client.Reactions.DescribeReaction(ctx, request)
				if err != nil {
					return err
				}
				if err := e.tell(reply, func() error { return e.describeReaction(reply) }); err != nil {
					return err
				}
				const open = kinegatev1.ChannelState_CHANNEL_STATE_OPEN
				if reply.GetState() == kinegatev1.ChannelState_CHANNEL_STATE_CLOSED && reply.GetQuasiFree().GetState() != open {
					return errNo
				}
				return nil
			})
		},
	}
	e.flags(c)
	initial.add(c)
	extra.add(c)
	return c
}

// reactionFlags say what is wanted beside the limits.
type reactionFlags struct {
	transfers      []string
	volume         bool
	nucleus, fermi string
}

// add adds the flags.
func (x *reactionFlags) add(c *cobra.Command) {
	f := c.Flags()
	f.StringArrayVar(&x.transfers, "t", nil,
		`squared momentum transfer wanted, such as "beam, pi+ pi-" or "target, X"; all of single products if not given; may be given several times`)
	f.BoolVar(&x.volume, "volume", false, "also give the volume of phase space")
	f.StringVar(&x.nucleus, "nucleus", "", "nucleus in which the target, p or n, is bound; adds the quasi-free and coherent thresholds")
	f.StringVar(&x.fermi, "fermi", "", `largest momentum of the nucleon in --nucleus, such as "250 MeV"`)
}

// read adds what the flags say to the request.
func (x *reactionFlags) read(request *kinegatev1.DescribeReactionRequest) error {
	request.WithPhaseSpaceVolume = x.volume
	for _, text := range x.transfers {
		initial, products, _ := strings.Cut(text, ",")
		name := strings.ToUpper(strings.TrimSpace(initial))
		value, ok := kinegatev1.InitialParticle_value["INITIAL_PARTICLE_"+name]
		if !ok || value == 0 || strings.TrimSpace(products) == "" {
			return badInput("--t %q: write \"beam\" or \"target\", a comma and products, such as \"beam, pi+ pi-\"", text)
		}
		request.MomentumTransfers = append(request.MomentumTransfers, &kinegatev1.MomentumTransferPair{
			Initial: kinegatev1.InitialParticle(value), Products: strings.Fields(products),
		})
	}
	if (x.nucleus == "") != (x.fermi == "") {
		return badInput("--nucleus and --fermi need each other")
	}
	if x.nucleus == "" {
		return nil
	}
	fermi, err := energy("--fermi", x.fermi)
	request.BoundNucleon = &kinegatev1.BoundNucleon{Nucleus: x.nucleus, FermiMomentumGev: fermi}
	return err
}

// digits are the significant digits of what is printed.
const digits = 7

func gev(x float64) string { return quantity.Format(x, quantity.Energy, digits) }

func (e *environment) describeReaction(r *kinegatev1.DescribeReactionResponse) error {
	e.print("%s%s", r.GetReaction(), stateText(r.GetState()))
	t := text.NewTable("", "")
	if cm := r.GetCentreOfMass(); cm != nil {
		t.Row("sqrt(s)", gev(cm.GetSqrtSGev()))
		t.Row("centre of mass", fmt.Sprintf("moves at beta %.6f, gamma %.6f", cm.GetBeta(), cm.GetGamma()))
	}
	thresholdRows(t, "threshold", r.GetThreshold())
	if lightest := r.GetLightestThreshold(); lightest != nil {
		thresholdRows(t, "threshold of the stated decays", lightest)
	}
	if r.ExcessEnergyGev != nil {
		t.Row("excess energy", gev(r.GetExcessEnergyGev())+" in sqrt(s)")
	}
	if r.LightestExcessEnergyGev != nil && r.GetLightestThreshold() != nil {
		t.Row("", gev(r.GetLightestExcessEnergyGev())+" above the lightest final state")
	}
	if r.BeamEnergyDeficitGev != nil {
		t.Row("beam energy missing", gev(r.GetBeamEnergyDeficitGev()))
	}
	if r.OneBodySMinusM2Gev2 != nil {
		t.Row("s - m^2", fmt.Sprintf("%.*g GeV^2", digits, r.GetOneBodySMinusM2Gev2()))
	}
	if x := r.GetInclusive(); x != nil {
		t.Row("X has", fmt.Sprintf("charge %s, baryon number %s, strangeness %d",
			thirdsText(x.GetChargeThirds()), thirdsText(x.GetBaryonNumberThirds()), x.GetStrangeness()))
		if len(x.GetLightest()) > 0 {
			t.Row("lightest X", strings.Join(x.GetLightest(), " ")+", "+gev(x.GetLightestMassGev()))
		}
	}
	if v := r.GetPhaseSpaceVolume(); v != nil {
		t.Row("phase space", fmt.Sprintf("%.*g%s", digits, v.GetVolume(), powerText(v.GetGevPower())))
	}
	for _, d := range r.GetDecays() {
		t.Row("decay", fmt.Sprintf("%s: %s, releases %s", d.GetDecay(), decayClassText(d.GetDecayClass()), gev(d.GetReleasedEnergyGev())))
	}
	for _, remark := range r.GetRemarks() {
		t.Row("remark", remark)
	}
	if err := t.Write(e.out); err != nil {
		return err
	}
	if err := e.productLimits(r); err != nil {
		return err
	}
	if err := e.quasiFree(r.GetQuasiFree()); err != nil {
		return err
	}
	e.print("\n  %s; particle table %s", r.GetFrame(), r.GetTableVersion())
	return nil
}

func stateText(s kinegatev1.ChannelState) string {
	if s == kinegatev1.ChannelState_CHANNEL_STATE_UNSPECIFIED {
		return ""
	}
	name := strings.TrimPrefix(s.String(), "CHANNEL_STATE_")
	return "   " + strings.ReplaceAll(name, "_", " ")
}

func decayClassText(c kinegatev1.DecayClass) string {
	return enumWord(c, "DECAY_CLASS_")
}

// enumWord is the name of an enum value as a page or a file has it.
func enumWord(value fmt.Stringer, prefix string) string {
	return strings.ToLower(strings.TrimPrefix(value.String(), prefix))
}

// thresholdRows adds what is known of a threshold.
func thresholdRows(t *text.Table, name string, x *kinegatev1.Threshold) {
	if x == nil {
		return
	}
	t.Row(name, "sqrt(s) "+gev(x.GetSqrtSGev())+plusMinus(x.GetSqrtSUncertaintyGev()))
	switch {
	case x.GetOpenAtRest():
		t.Row("", "open with the beam at rest")
	case x.TotalEnergyGev == nil:
		t.Row("", "no energy of the beam reaches it")
	default:
		t.Row("", "beam energy "+gev(x.GetTotalEnergyGev())+plusMinus(x.GetEnergyUncertaintyGev()))
		if x.GetKineticEnergyGev() != x.GetTotalEnergyGev() {
			t.Row("", "kinetic "+gev(x.GetKineticEnergyGev())+", momentum "+gev(x.GetMomentumGev()))
		}
	}
}

// powerText is the unit of a volume of phase space.
func powerText(power int32) string {
	if power == 0 {
		return ""
	}
	return fmt.Sprintf(" GeV^%d", power)
}

// quasiFree prints the thresholds on a bound nucleon.
func (e *environment) quasiFree(q *kinegatev1.QuasiFree) error {
	if q == nil {
		return nil
	}
	e.print("\n  on a nucleon of %s, momentum up to %s, with %s left over%s", q.GetNucleus(), gevs(q.GetFermiMomentumGev()), q.GetSpectator(),
		stateText(q.GetState()))
	t := text.NewTable("threshold", ">beam energy")
	row := func(name string, x *kinegatev1.Threshold) {
		value := "no energy of the beam reaches it"
		switch {
		case x.GetOpenAtRest():
			value = "open with the beam at rest"
		case x.TotalEnergyGev != nil:
			value = gev(x.GetTotalEnergyGev())
		}
		t.Row(name, value)
	}
	row("lowest, nucleon at "+gevs(q.GetLowestNucleonMomentumGev())+" against the beam", q.GetLowest())
	row("nucleon at rest in the nucleus", q.GetAtRest())
	row("highest, every nucleon takes part", q.GetHighest())
	row("absolute, the whole nucleus takes part", q.GetAbsolute())
	if q.GetCoherent() != nil {
		row("coherent, "+q.GetCoherentReaction(), q.GetCoherent())
	}
	if err := t.Write(e.out); err != nil {
		return err
	}
	e.print("  %s", q.GetModel())
	return nil
}

func plusMinus(x float64) string {
	if x == 0 {
		return ""
	}
	return " +- " + trimZeros(quantity.Format(x, quantity.Energy, 2))
}

// productLimits prints where the products can go.
func (e *environment) productLimits(r *kinegatev1.DescribeReactionResponse) error {
	if len(r.GetProducts()) > 0 {
		e.print("")
		t := text.NewTable("product", ">momentum (c.m.)", ">energy (lab)", ">momentum (lab)", ">angle (lab)")
		for _, p := range r.GetProducts() {
			t.Row(p.GetProduct(), energyRange(p.GetCentreOfMassMomentum()), energyRange(p.GetLaboratoryEnergy()),
				energyRange(p.GetLaboratoryMomentum()), angleRange(p.GetLaboratoryAngle()))
		}
		if err := t.Write(e.out); err != nil {
			return err
		}
	}
	if len(r.GetSubsetMasses()) > 0 {
		e.print("")
		t := text.NewTable("invariant mass of", ">range")
		for _, s := range r.GetSubsetMasses() {
			t.Row(strings.Join(s.GetProducts(), " "), energyRange(s.GetMass()))
		}
		if err := t.Write(e.out); err != nil {
			return err
		}
	}
	if len(r.GetMomentumTransfers()) > 0 {
		e.print("")
		t := text.NewTable("momentum transfer", ">forward", ">backward")
		for _, m := range r.GetMomentumTransfers() {
			initial := enumWord(m.GetInitial(), "INITIAL_PARTICLE_")
			t.Row(fmt.Sprintf("t(%s, %s)", initial, strings.Join(m.GetProducts(), " ")),
				fmt.Sprintf("%.6g GeV^2", m.GetTForwardGev2()), fmt.Sprintf("%.6g GeV^2", m.GetTBackwardGev2()))
		}
		return t.Write(e.out)
	}
	return nil
}

// energyRange prints both ends in the unit of the upper one.
func energyRange(r *kinegatev1.EnergyRange) string {
	const shown = 5
	low, high := quantity.Format(r.GetMinGev(), quantity.Energy, shown), quantity.Format(r.GetMaxGev(), quantity.Energy, shown)
	if low == high {
		return high
	}
	lowValue, lowUnit, _ := strings.Cut(low, " ")
	if _, highUnit, _ := strings.Cut(high, " "); lowUnit == highUnit || r.GetMinGev() == 0 {
		return trimZeros(lowValue) + " to " + high
	}
	return low + " to " + high
}

func angleRange(r *kinegatev1.AngleRange) string {
	const shown = 5
	low, _, _ := strings.Cut(quantity.Format(r.GetMinRad(), quantity.Angle, shown), " ")
	return trimZeros(low) + " to " + quantity.Format(r.GetMaxRad(), quantity.Angle, shown)
}
