package thermal

import (
	"math"

	"tidekiln/scenarios/key"
)

var frankKamenetskiiLaw = &key.Law{
	Name:    "frank-kamenetskii",
	Meaning: "exponential linearisation of thermally activated creep, η = η_ref exp[−γ(T − T_ref)] exp(−B f)",
	Source:  "Solomatov & Moresi 2000, JGR 105, 21795",
	Keys: viscosityKeys(key.Key{Name: "gamma", Kind: key.Quantity, Unit: "/K", Range: key.Positive(),
		Meaning: "γ, decay of ln η with temperature; E/(R T²) of the Arrhenius law it stands for"}),
}

// frankKamenetskii is ln η = ln η_ref − γ (T − T_ref); its rheological
// temperature scale is 1/γ everywhere.
type frankKamenetskii struct {
	constant float64 // ln η at T = 0
	gamma    float64 // 1/K
}

func newFrankKamenetskii(v key.Values) viscosity {
	g := v.Float("gamma")
	return frankKamenetskii{math.Log(v.Float("reference")) + g*v.Float("at"), g}
}

func (f frankKamenetskii) logViscosity(T float64) (ln, slope, curvature float64) {
	return f.constant - f.gamma*T, -f.gamma, 0
}
