package evolve

import (
	"math"
	"testing"

	"tidekiln/orbit"
	"tidekiln/scenarios"
	"tidekiln/thermal"
)

// G and the Julian year stand in the packages that need them, which do not know
// each other. They agree: a Myr of a scenario is a Myr of the tables, an Earth mass
// is its GM over the orbits' G, and an interior's gravity is made with that G.
func TestConstantsAgree(t *testing.T) {
	myr, err := scenarios.ParseQuantity("1 Myr", "s")
	if err != nil || myr != Megayear {
		t.Errorf("1 Myr is %v s in a scenario, %v in the tables (%v)", myr, Megayear, err)
	}
	earth, err := scenarios.ParseQuantity("1 M_earth", "kg")
	if err != nil {
		t.Fatal(err)
	}
	near(t, "GM of the Earth", orbit.G*earth, 3.986004e14, 1e-15) // IAU 2015 Resolution B3
	// k2 of a rock that is all but liquid, 3/2 (1 − 19μ/(2ρgR)) with g = Gm/R²,
	// hangs on the G of the interior.
	s := shipped(t, "lone-moon", set("orbiter.Ember.interior.rheology", `{ model = "maxwell", rigidity = "1e8 Pa" }`))
	o := s.Orbiters[0]
	in, err := thermal.NewInterior(o.Interior, thermal.Body{Mass: o.Mass, Radius: o.Radius})
	if err != nil {
		t.Fatal(err)
	}
	density := o.Mass / (4. / 3 * math.Pi * math.Pow(o.Radius, 3))
	b := 19 / (2 * density * orbit.G * o.Mass / o.Radius)
	love := in.Love(1) // fast: elastic, J = 1/μ, μ softened by melt
	mu := in.Snapshot().Rigidity.X
	near(t, "elastic k2", real(love), 1.5/(1+b*mu), 1e-9) // ωτ is 1e9 and more
}
