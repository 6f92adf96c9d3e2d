package main

import (
	"fmt"
	"math"

	"github.com/spf13/cobra"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/plot"
	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// photonComptonCommand describes Compton scattering.
func photonComptonCommand(p program) *cobra.Command {
	e := newEnvironment(p)
	var photon, angle, phi, total, kinetic, momentum string
	var thetas []string
	var picture drawing
	c := &cobra.Command{
		Use:   "compton [PARTICLE]",
		Short: "Compton scattering on a charged lepton at rest or in flight",
		Long: "compton gives edge, means and cross-sections of a photon scattered by a free charged\n" +
			"lepton, e- if none is given, at rest or with --beam in flight. Angles of the scattered\n" +
			"photon are from the photon before, or from the direction of the lepton in flight.",
		Example: `  kinegate photon compton --photon "661.657 keV" --theta "90 deg"
  kinegate photon compton --photon "1 eV" --beam "1 GeV" --angle "90 deg" --theta "1 mrad"`,
		Args: usage(cobra.MaximumNArgs(1)),
		RunE: func(c *cobra.Command, args []string) error {
			q := &kinegatev1.ComptonScattering{Particle: named(args)}
			var err error
			if q.PhotonEnergyGev, err = photonEnergy("--photon", photon); err != nil {
				return err
			}
			if q.Flight, err = motion("--beam", total, kinetic, momentum, false); err != nil {
				return err
			}
			if q.AngleBetweenBeamsRad, err = angleFlag("--angle", angle); err != nil {
				return err
			}
			if q.Directions, err = directions(thetas, phi); err != nil {
				return err
			}
			draw, err := picture.asked()
			if err != nil {
				return err
			}
			request := &kinegatev1.DescribePhotonProcessRequest{Process: &kinegatev1.DescribePhotonProcessRequest_Compton{Compton: q}}
			if _, err := e.photonAnswer(c.Context(), request, func(r *kinegatev1.DescribePhotonProcessResponse) error {
				return e.describeCompton(r.GetCompton(), q)
			}); err != nil || !draw {
				return err
			}
			if q.GetPhotonEnergyGev() == 0 {
				return badInput("--plot needs a photon with an energy")
			}
			q.Directions = nil
			for _, theta := range span(0, math.Pi, 361, false) {
				q.Directions = append(q.Directions, &kinegatev1.ScatteringDirection{ThetaRad: theta})
			}
			q.TotalsAtPhotonEnergiesGev = span(q.GetPhotonEnergyGev()*1e-3, q.GetPhotonEnergyGev()*1e3, 400, true)
			reply, err := e.photonProcess(c.Context(), request)
			if err != nil {
				return err
			}
			return picture.save(e, comptonPicture(reply.GetCompton(), q))
		},
	}
	e.flags(c)
	f := c.Flags()
	f.StringVar(&photon, "photon", "", `energy, wavelength or frequency of the photon, such as "662 keV"`)
	f.StringVar(&total, "beam", "", "total energy of the lepton; at rest if none of the three is given")
	f.StringVar(&kinetic, "beam-kinetic", "", "kinetic energy of the lepton")
	f.StringVar(&momentum, "beam-momentum", "", "momentum of the lepton")
	f.StringVar(&angle, "angle", "", "angle between the directions of photon and lepton; head on if not given")
	f.StringArrayVar(&thetas, "theta", nil, "angle of the scattered photon; may be given several times")
	f.StringVar(&phi, "phi", "", "azimuth of the scattered photon about the lepton in flight, 0 on the photon's side")
	picture.flag(c)
	return c
}

// directions reads the directions of the scattered photon.
func directions(thetas []string, phi string) ([]*kinegatev1.ScatteringDirection, error) {
	list, err := flagList("--theta", thetas, quantity.Angle)
	if err != nil {
		return nil, err
	}
	azimuth, err := angleFlag("--phi", phi)
	if err != nil {
		return nil, err
	}
	var to []*kinegatev1.ScatteringDirection
	for _, theta := range list {
		d := &kinegatev1.ScatteringDirection{ThetaRad: theta}
		if azimuth != nil {
			d.PhiRad = *azimuth
		}
		to = append(to, d)
	}
	return to, nil
}

func (e *environment) describeCompton(a *kinegatev1.ComptonAnswer, q *kinegatev1.ComptonScattering) error {
	where := "at rest"
	if q.GetFlight() != nil {
		where = "in flight"
	}
	e.print("gamma %s -> gamma %s, %s %s, photon of %s", a.GetParticle(), a.GetParticle(), a.GetParticle(), where, gev(q.GetPhotonEnergyGev()))
	t := text.NewTable("", "")
	if x := a.GetAtRest(); x != nil {
		t.Row("Compton edge", gev(x.GetEdgeGev())+", the largest kinetic energy of the recoil")
		t.Row("photon scattered back", gev(x.GetBackscatteredGev()))
		t.Row("mean scattered photon", gev(x.GetMeanScatteredGev()))
		t.Row("mean recoil", gev(x.GetMeanRecoilGev()))
	}
	t.Row("photon in the rest frame", fmt.Sprintf("%.*g masses", digits, a.GetRestEnergyRatio()))
	t.Row("cross-section", fmt.Sprintf("%s, %.6f of Thomson's %s", barn(a.GetTotalBarn()), a.GetTotalBarn()/a.GetThomsonBarn(), barn(a.GetThomsonBarn())))
	if x := a.GetAtRest(); x != nil {
		t.Row("weighted with the recoil", barn(x.GetEnergyTransferBarn()))
	}
	if err := t.Write(e.out); err != nil || len(a.GetPoints()) == 0 {
		return err
	}
	e.print("")
	t = text.NewTable(">angle", ">scattered photon", ">cross-section per sr", ">recoil kinetic", ">recoil angle")
	for _, x := range a.GetPoints() {
		cells := []string{narrow(x.GetDirection().GetThetaRad(), digits), gev(x.GetPhotonEnergyGev()), barn(x.GetDifferentialBarnPerSr())}
		if x.RecoilAngleRad != nil {
			cells = append(cells, gev(x.GetRecoilKineticEnergyGev()), narrow(x.GetRecoilAngleRad(), digits))
		}
		t.Row(cells...)
	}
	return t.Write(e.out)
}

// comptonPicture is the cross-section against energy, and against angle at the energy
// asked for.
func comptonPicture(a *kinegatev1.ComptonAnswer, q *kinegatev1.ComptonScattering) *plot.Picture {
	angles := make([]float64, len(a.GetPoints()))
	densities := make([]float64, len(angles))
	for i, x := range a.GetPoints() {
		angles[i] = x.GetDirection().GetThetaRad() * 180 / math.Pi
		densities[i] = x.GetDifferentialBarnPerSr()
	}
	unit, factor := scaleFor(a.GetThomsonBarn(), quantity.CrossSection)
	perUnit, perFactor := scaleFor(largest(densities), quantity.CrossSection)
	energy := shortEnergy(q.GetPhotonEnergyGev())
	from := "angle of the photon from its direction before (deg)"
	if q.GetFlight() != nil {
		from = "angle of the photon from the lepton in flight (deg)"
	}
	return &plot.Picture{
		Title: "gamma " + a.GetParticle() + " -> gamma " + a.GetParticle(),
		Panels: []plot.Panel{{
			X:      plot.Axis{Label: "energy of the photon before", Log: true, Tick: energyTick},
			Y:      plot.Axis{Label: "cross-section (" + unit + ")"},
			Curves: []plot.Curve{{X: q.GetTotalsAtPhotonEnergiesGev(), Y: scaled(a.GetTotalsBarn(), factor), Heavy: true}},
			Rulers: []plot.Ruler{
				{At: a.GetThomsonBarn() * factor, Level: true, Text: "Thomson"},
				{At: q.GetPhotonEnergyGev(), Text: energy},
			},
		}, {
			X:      plot.Axis{Label: from, Min: 0, Max: 180, Step: 30},
			Y:      plot.Axis{Label: "cross-section per solid angle (" + perUnit + "/sr)", Log: q.GetFlight() != nil},
			Curves: []plot.Curve{{X: angles, Y: scaled(densities, perFactor), Heavy: true}},
			Note:   "at " + energy,
		}},
	}
}
