package api

import (
	"example.org/kinegate/kinematics/selection"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// window converts a window; each member of its oneof is one observable.
func (f *former) window(at string, m *kinegatev1.Window) selection.Window {
	w := selection.Window{Name: m.GetName()}
	switch x := m.GetObservable().(type) {
	case *kinegatev1.Window_InvariantMass:
		mass(&w, selection.InvariantMass, x.InvariantMass)
	case *kinegatev1.Window_InvariantMassSquared:
		massSquared(&w, selection.InvariantMassSquared, x.InvariantMassSquared)
	case *kinegatev1.Window_MissingMass:
		mass(&w, selection.MissingMass, x.MissingMass)
	case *kinegatev1.Window_MissingMassSquared:
		massSquared(&w, selection.MissingMassSquared, x.MissingMassSquared)
	case *kinegatev1.Window_Energy:
		f.energy(at+".energy", &w, selection.Energy, x.Energy)
	case *kinegatev1.Window_Momentum:
		f.energy(at+".momentum", &w, selection.Momentum, x.Momentum)
	case *kinegatev1.Window_TransverseMomentum:
		f.energy(at+".transverse_momentum", &w, selection.TransverseMomentum, x.TransverseMomentum)
	case *kinegatev1.Window_Angle:
		w.Observable, w.Products = selection.Angle, x.Angle.GetProducts()
		w.Frame = enumForm[selection.Frame](f, at+".angle.frame", x.Angle.GetFrame())
		w.Min, w.Max = x.Angle.MinRad, x.Angle.MaxRad
	case *kinegatev1.Window_OpeningAngle:
		w.Observable = selection.OpeningAngle
		w.Products, w.Second = reference(x.OpeningAngle.GetFirst()), reference(x.OpeningAngle.GetSecond())
		w.Frame = enumForm[selection.Frame](f, at+".opening_angle.frame", x.OpeningAngle.GetFrame())
		w.Min, w.Max = x.OpeningAngle.MinRad, x.OpeningAngle.MaxRad
	case *kinegatev1.Window_Coplanarity:
		w.Observable = selection.Coplanarity
		w.Products, w.Second = x.Coplanarity.GetFirst(), x.Coplanarity.GetSecond()
		w.Min, w.Max = x.Coplanarity.MinRad, x.Coplanarity.MaxRad
	case *kinegatev1.Window_MissingDirection:
		w.Observable, w.Products = selection.MissingDirection, reference(x.MissingDirection.GetProduct())
		w.Min, w.Max = x.MissingDirection.MinRad, x.MissingDirection.MaxRad
	case *kinegatev1.Window_MomentumTransfer:
		f.transfer(at+".momentum_transfer", &w, selection.MomentumTransfer, x.MomentumTransfer)
	case *kinegatev1.Window_MomentumTransferPrime:
		f.transfer(at+".momentum_transfer_prime", &w, selection.MomentumTransferPrime, x.MomentumTransferPrime)
	case *kinegatev1.Window_TimeDifference:
		w.Observable, w.Min, w.Max = selection.TimeDifference, x.TimeDifference.MinNs, x.TimeDifference.MaxNs
	case *kinegatev1.Window_UnusedPhotonEnergy:
		w.Observable = selection.UnusedPhotonEnergy
		w.Min, w.Max = x.UnusedPhotonEnergy.MinGev, x.UnusedPhotonEnergy.MaxGev
	case *kinegatev1.Window_VertexZ:
		w.Observable, w.Min, w.Max = selection.VertexZ, x.VertexZ.MinM, x.VertexZ.MaxM
	case *kinegatev1.Window_FlightDistance:
		w.Observable, w.Products = selection.FlightDistance, reference(x.FlightDistance.GetProduct())
		w.Min, w.Max = x.FlightDistance.MinM, x.FlightDistance.MaxM
	case *kinegatev1.Window_Pointing:
		w.Observable, w.Products = selection.Pointing, reference(x.Pointing.GetProduct())
		w.Min, w.Max = x.Pointing.MinRad, x.Pointing.MaxRad
	case *kinegatev1.Window_FitProbability:
		w.Observable, w.Min, w.Max = selection.FitProbability, x.FitProbability.Min, x.FitProbability.Max
	default:
		f.need(at, "empty", "one observable")
	}
	return w
}

func mass(w *selection.Window, o selection.Observable, m *kinegatev1.MassWindow) {
	w.Observable, w.Products, w.Min, w.Max = o, m.GetProducts(), m.MinGev, m.MaxGev
}

func massSquared(w *selection.Window, o selection.Observable, m *kinegatev1.MassSquaredWindow) {
	w.Observable, w.Products, w.Min, w.Max = o, m.GetProducts(), m.MinGev2, m.MaxGev2
}

func (f *former) energy(at string, w *selection.Window, o selection.Observable, m *kinegatev1.EnergyWindow) {
	w.Observable, w.Products, w.Min, w.Max = o, m.GetProducts(), m.MinGev, m.MaxGev
	w.Frame = enumForm[selection.Frame](f, at+".frame", m.GetFrame())
}

func (f *former) transfer(at string, w *selection.Window, o selection.Observable, m *kinegatev1.MomentumTransferWindow) {
	w.Observable, w.Products, w.Min, w.Max = o, m.GetProducts(), m.MinGev2, m.MaxGev2
	w.Initial = enumForm[selection.Initial](f, at+".initial", m.GetInitial())
}

// reference is the list that one reference makes; an empty one makes none.
func reference(product string) []string {
	if product == "" {
		return nil
	}
	return []string{product}
}
