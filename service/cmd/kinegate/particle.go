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

// particleCommand prints particles.
func particleCommand(p program) *cobra.Command {
	e := newEnvironment(p)
	var containing string
	var list bool
	c := &cobra.Command{
		Use:   "particle NAME...",
		Short: "Print mass, lifetime and quantum numbers of particles",
		Example: `  kinegate particle K+ Lambda
  kinegate particle 2212
  kinegate particle --list --containing Sigma`,
		RunE: func(c *cobra.Command, args []string) error {
			client, closeClient, err := e.connect(c.Context())
			if err != nil {
				return err
			}
			defer closeClient()
			if list || containing != "" {
				return e.listParticles(c.Context(), client, containing)
			}
			if len(args) == 0 {
				return badInput("no particle was named; give names or numbers, or --list")
			}
			for _, name := range args {
				if err := e.showParticle(c.Context(), client, name); err != nil {
					return err
				}
			}
			return nil
		},
	}
	e.flags(c)
	c.Flags().BoolVar(&list, "list", false, "list the table")
	c.Flags().StringVar(&containing, "containing", "", "list the particles with this text in their name or an alias")
	return c
}

// particleRequest asks by number where the text is one.
func particleRequest(name string) *kinegatev1.GetParticleRequest {
	var number int64
	var rest string
	if n, _ := fmt.Sscanf(name, "%d%s", &number, &rest); n == 1 {
		return &kinegatev1.GetParticleRequest{Key: &kinegatev1.GetParticleRequest_ParticleNumber{ParticleNumber: number}}
	}
	return &kinegatev1.GetParticleRequest{Key: &kinegatev1.GetParticleRequest_Name{Name: name}}
}

func (e *environment) showParticle(ctx context.Context, client *kinegate.Client, name string) error {
	ctx, cancel := e.calling(ctx)
	defer cancel()
	reply, err := client.Particles.GetParticle(ctx, particleRequest(name))
	if err != nil {
		return err
	}
	return e.tell(reply, func() error { return e.describeParticle(reply.GetParticle(), reply.GetTableVersion()) })
}

func (e *environment) describeParticle(p *kinegatev1.Particle, tableVersion string) error {
	e.print("%s  %s, particle number %d", p.GetName(), p.GetDescription(), p.GetParticleNumber())
	t := text.NewTable("", "")
	t.Row("mass", massText(p))
	t.Row("lifetime", lifetimeText(p))
	t.Row("charge", thirdsText(p.GetChargeThirds()))
	t.Row("spin, parity", spinText(p))
	t.Row("quantum numbers", quantumText(p))
	if p.GetAntiparticleNumber() != p.GetParticleNumber() {
		t.Row("antiparticle", fmt.Sprintf("%s, particle number %d", p.GetAntiparticleName(), p.GetAntiparticleNumber()))
	} else {
		t.Row("antiparticle", "itself")
	}
	if len(p.GetAliases()) > 0 {
		t.Row("also written", strings.Join(p.GetAliases(), ", "))
	}
	if p.GetNotBreitWigner() {
		t.Row("remark", "no Breit-Wigner: mass and width only say where the state lies")
	}
	t.Row("source", p.GetSource())
	t.Row("table version", tableVersion)
	if err := t.Write(e.out); err != nil {
		return err
	}
	e.print("")
	return nil
}

func (e *environment) listParticles(ctx context.Context, client *kinegate.Client, containing string) error {
	t := text.NewTable(">number", "name", ">mass", "lifetime", ">charge", "description")
	request := &kinegatev1.ListParticlesRequest{NameContains: containing}
	var version string
	for {
		ctx, cancel := e.calling(ctx)
		reply, err := client.Particles.ListParticles(ctx, request)
		cancel()
		if err != nil {
			return err
		}
		if err := e.tell(reply, func() error {
			for _, p := range reply.GetParticles() {
				t.Row(fmt.Sprint(p.GetParticleNumber()), p.GetName(), quantity.Format(p.GetMassGev(), quantity.Energy, 7),
					lifetimeText(p), thirdsText(p.GetChargeThirds()), p.GetDescription())
			}
			return nil
		}); err != nil {
			return err
		}
		version = reply.GetTableVersion()
		if request.PageToken = reply.GetNextPageToken(); request.GetPageToken() == "" {
			break
		}
	}
	if e.json {
		return nil
	}
	if err := t.Write(e.out); err != nil {
		return err
	}
	e.print("  %d particles, table %s", t.Rows(), version)
	return nil
}

func massText(p *kinegatev1.Particle) string {
	const digits = 12
	mass := strings.TrimSuffix(trimZeros(quantity.Format(p.GetMassGev(), quantity.Energy, digits)), " GeV")
	if p.GetMassGev() != 0 {
		mass = trimZeros(quantity.Format(p.GetMassGev(), quantity.Energy, digits))
	}
	if p.MassUncertaintyGev == nil || p.GetMassUncertaintyGev() == 0 {
		return mass + " (exact by convention)"
	}
	return mass + " +- " + trimZeros(quantity.Format(p.GetMassUncertaintyGev(), quantity.Energy, 3))
}

func lifetimeText(p *kinegatev1.Particle) string {
	switch {
	case p.GetStable():
		return "stable"
	case p.MeanLifeS == nil && p.WidthGev == nil:
		return "not known"
	case p.GetWidthGev() > 1e-9:
		return "width " + trimZeros(quantity.Format(p.GetWidthGev(), quantity.Energy, 4)) +
			uncertainty(p.WidthUncertaintyGev, quantity.Energy)
	}
	const lightMetresPerSecond = 299792458
	return "mean life " + trimZeros(quantity.Format(p.GetMeanLifeS(), quantity.Time, 6)) +
		uncertainty(p.MeanLifeUncertaintyS, quantity.Time) +
		", c tau " + quantity.Format(p.GetMeanLifeS()*lightMetresPerSecond, quantity.Length, 4)
}

func uncertainty(x *float64, dimension quantity.Dimension) string {
	if x == nil || *x == 0 {
		return ""
	}
	return " +- " + trimZeros(quantity.Format(*x, dimension, 2))
}

// trimZeros drops zeros behind the point, which the source did not print.
func trimZeros(s string) string {
	value, name, found := strings.Cut(s, " ")
	if strings.Contains(value, ".") && !strings.ContainsAny(value, "eE") {
		value = strings.TrimSuffix(strings.TrimRight(value, "0"), ".")
	}
	if !found {
		return value
	}
	return value + " " + name
}

// thirdsText prints a charge or a baryon number.
func thirdsText(thirds int32) string {
	const perCharge = 3
	switch {
	case thirds == 0:
		return "0"
	case thirds%perCharge == 0:
		return fmt.Sprintf("%+d", thirds/perCharge)
	}
	return fmt.Sprintf("%+d/3", thirds)
}

func spinText(p *kinegatev1.Particle) string {
	spin := fmt.Sprint(p.GetSpinDoubled() / 2)
	if p.GetSpinDoubled()%2 != 0 {
		spin = fmt.Sprintf("%d/2", p.GetSpinDoubled())
	}
	sign := map[int32]string{1: "+", -1: "-"}
	if p.Parity != nil {
		spin += ", P " + sign[p.GetParity()]
	}
	if p.CParity != nil {
		spin += ", C " + sign[p.GetCParity()]
	}
	return spin
}

func quantumText(p *kinegatev1.Particle) string {
	var parts []string
	if n := p.GetBaryonNumberThirds(); n != 0 {
		parts = append(parts, "baryon number "+thirdsText(n))
	}
	for _, q := range []struct {
		name  string
		value int32
	}{
		{"electron number", p.GetElectronNumber()},
		{"muon number", p.GetMuonNumber()}, {"tau number", p.GetTauNumber()},
		{"strangeness", p.GetStrangeness()}, {"charm", p.GetCharm()},
		{"bottomness", p.GetBottomness()}, {"topness", p.GetTopness()},
	} {
		if q.value != 0 {
			parts = append(parts, fmt.Sprintf("%s %+d", q.name, q.value))
		}
	}
	if len(parts) == 0 {
		return "all zero"
	}
	return strings.Join(parts, ", ")
}
