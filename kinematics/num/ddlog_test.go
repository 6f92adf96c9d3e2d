package num_test

import (
	"math"
	"math/big"
	"testing"

	"example.org/kinegate/kinematics/num"
)

// The answers were computed with mpmath 1.4.1 at 60 digits (mp.log, mp.log1p) for
// exactly the double arguments.
func TestDoubleDoubleLogarithms(t *testing.T) {
	cases := []struct {
		name string
		got  num.DD
		want string
	}{
		{"log 2.0", num.FromFloat(2.0).Log(), "0.69314718055994530941723212145817656807550013436026"},
		{"log 0.5", num.FromFloat(0.5).Log(), "-0.69314718055994530941723212145817656807550013436026"},
		{"log 3.0", num.FromFloat(3.0).Log(), "1.0986122886681096913952452369225257046474905578227"},
		{"log 0.7071067811865475", num.FromFloat(0.7071067811865475).Log(), "-0.34657359027997274335977535248736847209171808827857"},
		{"log 0.7071067811865476", num.FromFloat(0.7071067811865476).Log(), "-0.34657359027997258635052948410986093965345921385706"},
		{"log 1.4142135623730951", num.FromFloat(1.4142135623730951).Log(), "0.3465735902799727230667026373483156284220409205032"},
		{"log 1.0000000000000002", num.FromFloat(1.0000000000000002).Log(), "2.2204460492503128343282304546154879259823318079011e-16"},
		{"log 0.9999999999999999", num.FromFloat(0.9999999999999999).Log(), "-1.1102230246251566020533898884823721718097327200653e-16"},
		{"log 1e-200", num.FromFloat(1e-200).Log(), "-460.51701859880913682149802853779008208436618902731"},
		{"log 1e200", num.FromFloat(1e200).Log(), "460.51701859880913677333141314938320272165285549979"},
		{"log 7.5", num.FromFloat(7.5).Log(), "2.014903020542264756578772448690536776097591777731"},
		{"log 0.3", num.FromFloat(0.3).Log(), "-1.2039728043259360296301803719337238685164245381839"},
		{"log 12345.678", num.FromFloat(12345.678).Log(), "9.4210613212918319670971421498590950543668580938052"},
		{"log1p 1e-200", num.FromFloat(1e-200).Log1p(), "9.9999999999999998210026239908275959605441178928975e-201"},
		{"log1p 1e-16", num.FromFloat(1e-16).Log1p(), "9.9999999999999992909778672403460898539577587071923e-17"},
		{"log1p -1e-9", num.FromFloat(-1e-9).Log1p(), "-0.0000000010000000005000000626149248536447812724918519047428"},
		{"log1p 0.25", num.FromFloat(0.25).Log1p(), "0.22314355131420975576629509030983450337460108554801"},
		{"log1p 0.2500000000000001", num.FromFloat(0.2500000000000001).Log1p(), "0.22314355131420984458413706032235379296060842775484"},
		{"log1p -0.25", num.FromFloat(-0.25).Log1p(), "-0.28768207245178092743921900599382743150350971089776"},
		{"log1p -0.2500000000000001", num.FromFloat(-0.2500000000000001).Log1p(), "-0.28768207245178107546895562268137711105586019261663"},
		{"log1p -0.999", num.FromFloat(-0.999).Log1p(), "-6.9077552789821361638755546639282547143505804988992"},
		{"log1p 3.5", num.FromFloat(3.5).Log1p(), "1.5040773967762740733732583523868748412194809812852"},
		{"log1p 1e100", num.FromFloat(1e100).Log1p(), "230.25850929940456841770203657819633868049525689483"},
		{"log two words", num.DD{Hi: 1.25, Lo: 3e-18}.Log(), "0.22314355131420975816629509030983436404762771468289"},
		{"log1p two words", num.DD{Hi: 1e-5, Lo: 3e-23}.Log1p(), "0.0000099999500003333316813753920863919937272827752603841"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			want, _, err := big.ParseFloat(c.want, 10, 300, big.ToNearestEven)
			if err != nil {
				t.Fatal(err)
			}
			got := new(big.Float).SetPrec(300).Add(big.NewFloat(c.got.Hi), big.NewFloat(c.got.Lo))
			relative, _ := new(big.Float).Quo(got.Sub(got, want), want).Float64()
			if math.Abs(relative) > 0x1p-98 {
				t.Errorf("relative error %.3g, bound %.3g", relative, 0x1p-98)
			}
		})
	}
}

func TestDoubleDoubleLogarithmsSpecialCases(t *testing.T) {
	one, minusOne := num.FromFloat(1), num.FromFloat(-1)
	if !one.Log().IsZero() || !(num.DD{}).Log1p().IsZero() {
		t.Error("log of 1 is not exactly zero")
	}
	if !math.IsInf((num.DD{}).Log().Hi, -1) || !math.IsInf(minusOne.Log1p().Hi, -1) {
		t.Error("log of 0 is not -Inf")
	}
	if !math.IsNaN(minusOne.Log().Hi) || !math.IsNaN(num.FromFloat(math.NaN()).Log().Hi) {
		t.Error("log outside the domain is not NaN")
	}
}
