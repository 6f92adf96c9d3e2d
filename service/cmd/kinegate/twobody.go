package main

import (
	"context"
	"fmt"

	"github.com/spf13/cobra"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// variableFlag is a flag that lists values of one variable of a product.
type variableFlag struct {
	name, usage, heading string
	// read reads a list of values and prints one of them.
	read  func(string) ([]float64, error)
	print func(float64) string
	// field is where the values go in a request.
	field func(*kinegatev1.SolveTwoBodyRequest) *[]float64
}

func angles(s string) ([]float64, error)   { return quantity.ParseList(s, quantity.Angle) }
func energies(s string) ([]float64, error) { return quantity.ParseList(s, quantity.Energy) }
func squares(s string) ([]float64, error)  { return quantity.ParseList(s, quantity.Square) }

// degrees, gevs, squareGev and number print one value of a table.
func degrees(x float64) string   { return trimZeros(quantity.Format(x, quantity.Angle, digits)) }
func gevs(x float64) string      { return trimZeros(quantity.Format(x, quantity.Energy, digits)) }
func squareGev(x float64) string { return fmt.Sprintf("%.6g GeV^2", x) }
func number(x float64) string    { return fmt.Sprintf("%.6g", x) }

// variableFlags lists the variables in the order of their help.
func variableFlags() []variableFlag {
	type request = kinegatev1.SolveTwoBodyRequest
	return []variableFlag{
		{"lab-angle", `angles from the beam in the laboratory, such as "10, 20 deg" or "0 to 40 by 10 deg"`, "angle (lab)",
			angles, degrees, func(r *request) *[]float64 { return &r.LaboratoryAnglesRad }},
		{"cm-angle", "angles from the beam in the centre-of-mass frame", "angle (c.m.)",
			angles, degrees, func(r *request) *[]float64 { return &r.CentreOfMassAnglesRad }},
		{"cm-cosine", `cosines of these, such as "-1 to 1 by 0.1"`, "cosine (c.m.)",
			quantity.ParseNumbers, number, func(r *request) *[]float64 { return &r.CentreOfMassCosines }},
		{"energy", `total energies in the laboratory, such as "1.2, 1.3 GeV"`, "energy (lab)",
			energies, gevs, func(r *request) *[]float64 { return &r.LaboratoryTotalEnergiesGev }},
		{"kinetic", "kinetic energies in the laboratory", "kinetic (lab)",
			energies, gevs, func(r *request) *[]float64 { return &r.LaboratoryKineticEnergiesGev }},
		{"momentum", "momenta in the laboratory", "momentum (lab)",
			energies, gevs, func(r *request) *[]float64 { return &r.LaboratoryMomentaGev }},
		{"t", `squared momentum transfers t(beam, product), such as "-0.5, -0.1 GeV^2"`, "t(beam, product)",
			squares, squareGev, func(r *request) *[]float64 { return &r.TValuesGev2 }},
		{"t-prime", "distances of t from its forward end, at least 0", "t' (beam, product)",
			squares, squareGev, func(r *request) *[]float64 { return &r.TPrimeValuesGev2 }},
	}
}

// twoBodyCommand solves two-body kinematics.
func twoBodyCommand(p program) *cobra.Command {
	e := newEnvironment(p)
	initial := &initialFlags{}
	variables := variableFlags()
	values := make([]string, len(variables))
	var product string
	var picture drawing
	c := &cobra.Command{
		Use:   "two-body TEXT",
		Short: "Say where both products of a two-body reaction go at given angles, energies or t",
		Long: "two-body gives both products of a two-body reaction in both frames for values of one\n" +
			"variable of one product: every branch, the ratio of solid angles, the largest angle.\n" +
			"Without values it prints the limits. A list is written \"10, 20, 30 deg\" or\n" +
			"\"0 to 40 by 10 deg\".\n" +
			"It exits with 3 if the channel is closed or if no direction leads to any of the values.",
		Example: `  kinegate two-body "gamma p -> K+ Lambda" --beam "1.5 GeV" --lab-angle "0 to 30 by 10 deg"
  kinegate two-body "gamma p -> K+ Lambda" --beam "1.5 GeV" --product Lambda --lab-angle "20 deg"
  kinegate two-body "gamma p -> p pi0" --beam "350 MeV" --product pi0 --t "-0.1 GeV^2"`,
		Args: usage(cobra.ExactArgs(1)),
		RunE: func(c *cobra.Command, args []string) error {
			request := &kinegatev1.SolveTwoBodyRequest{
				Form: &kinegatev1.SolveTwoBodyRequest_Reaction{Reaction: args[0]}, Product: product,
			}
			var err error
			if request.InitialState, err = initial.required(args[0]); err != nil {
				return err
			}
			draw, err := picture.asked()
			if err != nil {
				return err
			}
			var chosen *variableFlag
			var asked []float64
			for i := range variables {
				if values[i] == "" {
					continue
				}
				if chosen != nil {
					return badInput("--%s and --%s both list values; give one", chosen.name, variables[i].name)
				}
				chosen = &variables[i]
				if asked, err = chosen.read(values[i]); err != nil {
					return badInput("--%s: %w", chosen.name, err)
				}
				*chosen.field(request) = asked
			}
			return e.asking(c.Context(), args[0], func(ctx context.Context, client *kinegate.Client) error {
				reply, err := client.Reactions.SolveTwoBody(ctx, request)
				if err != nil {
					return err
				}
				if err := e.tell(reply, func() error { return e.printTwoBody(reply, chosen, asked, product) }); err != nil {
					return err
				}
				if draw {
					if err := e.drawTwoBody(ctx, client, request, reply, &picture); err != nil {
						return err
					}
				}
				if len(reply.GetProducts()) == 0 || chosen != nil && branchCount(reply) == 0 {
					return errNo
				}
				return nil
			})
		},
	}
	e.flags(c)
	initial.add(c)
	picture.flag(c)
	c.Flags().StringVar(&product, "product", "", `product that the values belong to, such as Lambda or "p[1]"; the first if not given`)
	for i, v := range variables {
		c.Flags().StringVar(&values[i], v.name, "", v.usage)
	}
	return c
}

func branchCount(r *kinegatev1.SolveTwoBodyResponse) int {
	n := 0
	for _, s := range r.GetSolutions() {
		n += len(s.GetBranches())
	}
	return n
}

func (e *environment) printTwoBody(
	r *kinegatev1.SolveTwoBodyResponse, chosen *variableFlag, asked []float64, product string,
) error {
	e.print("%s%s", r.GetReaction(), stateText(r.GetState()))
	t := text.NewTable("", "")
	if cm := r.GetCentreOfMass(); cm != nil {
		t.Row("sqrt(s)", gev(cm.GetSqrtSGev()))
		if cm.FinalMomentumGev != nil {
			t.Row("momentum (c.m.)", gev(cm.GetFinalMomentumGev()))
		}
	}
	t.Row("excess energy", gev(r.GetExcessEnergyGev())+" in sqrt(s)")
	if r.BeamEnergyDeficitGev != nil {
		t.Row("beam energy missing", gev(r.GetBeamEnergyDeficitGev()))
	}
	if err := t.Write(e.out); err != nil {
		return err
	}
	if len(r.GetProducts()) == 2 {
		if err := e.printTwoBodyLimits(r); err != nil {
			return err
		}
		if chosen != nil {
			if err := e.printSolutions(r, chosen, asked, product); err != nil {
				return err
			}
		}
	}
	e.print("\n  %s; particle table %s", r.GetFrame(), r.GetTableVersion())
	return nil
}

// printTwoBodyLimits prints the ranges of both products.
func (e *environment) printTwoBodyLimits(r *kinegatev1.SolveTwoBodyResponse) error {
	e.print("")
	t := text.NewTable("product", ">energy (lab)", ">momentum (lab)", ">largest angle (lab)", ">t forward", ">t backward")
	for _, p := range r.GetProducts() {
		largest := degrees(p.GetMaxLaboratoryAngleRad())
		if p.GetDoubleValued() {
			largest += ", two momenta below"
		}
		t.Row(p.GetLimits().GetProduct(), energyRange(p.GetLimits().GetLaboratoryEnergy()), energyRange(p.GetLimits().GetLaboratoryMomentum()),
			largest, squareGev(p.GetTForwardGev2()), squareGev(p.GetTBackwardGev2()))
	}
	return t.Write(e.out)
}

// printSolutions prints a row for every branch, the product in question first.
func (e *environment) printSolutions(
	r *kinegatev1.SolveTwoBodyResponse, chosen *variableFlag, asked []float64, product string,
) error {
	names := [2]string{r.GetProducts()[0].GetLimits().GetProduct(), r.GetProducts()[1].GetLimits().GetProduct()}
	first, second := 0, 1
	if product == names[1] && product != names[0] {
		first, second = 1, 0
	}
	e.print("")
	t := text.NewTable(">"+names[first]+": "+chosen.heading, ">angle (c.m.)", ">angle (lab)", ">energy (lab)", ">momentum (lab)",
		">c.m./lab", ">"+names[second]+": angle (lab)", ">momentum (lab)", ">t(beam, "+names[first]+")")
	for i, s := range r.GetSolutions() {
		if len(s.GetBranches()) == 0 {
			t.Row(chosen.print(asked[i]), "none")
		}
		for k, b := range s.GetBranches() {
			value := ""
			if k == 0 {
				value = chosen.print(asked[i])
			}
			transfer := b.GetTGev2()
			if first == 1 {
				transfer = b.GetUGev2()
			}
			p, q := b.GetProducts()[first], b.GetProducts()[second]
			t.Row(value, degrees(p.GetCentreOfMassAngleRad()), shown(p.LaboratoryAngleRad != nil, p.GetLaboratoryAngleRad(), degrees),
				shown(p.LaboratoryTotalEnergyGev != nil, p.GetLaboratoryTotalEnergyGev(), gevs),
				shown(p.LaboratoryMomentumGev != nil, p.GetLaboratoryMomentumGev(), gevs),
				shown(p.CentreOfMassPerLaboratory != nil, p.GetCentreOfMassPerLaboratory(), number),
				shown(q.LaboratoryAngleRad != nil, q.GetLaboratoryAngleRad(), degrees),
				shown(q.LaboratoryMomentumGev != nil, q.GetLaboratoryMomentumGev(), gevs), squareGev(transfer))
		}
	}
	if err := t.Write(e.out); err != nil {
		return err
	}
	e.print("\n  c.m./lab is the ratio of solid angles; none: no direction leads to the value")
	return nil
}

// shown prints a number that may be absent.
func shown(given bool, x float64, form func(float64) string) string {
	if !given {
		return "-"
	}
	return form(x)
}
