package evolve

import (
	"context"
	"math"
	"slices"
	"testing"

	"tidekiln/evolve/record"
	"tidekiln/scenarios"
)

// Observations at the start, within, and at the end: the misfit is the root mean
// square of (model − observed)/error, of all and of each body.
func TestMisfit(t *testing.T) {
	plain := bodiesOf(t, run1(t, shipped(t, "volcanic-cycle", set("run.span", "40 Myr"))))
	at := func(body string, myr float64, column string) float64 { return value(t, plain, body, myr, column) }
	// Two standard errors off at the start, one at 20 Myr, three at the end.
	list := []scenarios.Observed{
		{Body: "Cinder", Column: "temperature_K", Value: at("Cinder", 0, "temperature_K") + 2*7, Error: 7, At: 0},
		{Body: "Cinder", Column: "surface_loss_W", Value: at("Cinder", 20, "surface_loss_W") - 1e12, Error: 1e12, At: 20 * Megayear},
		{Body: "Brine", Column: "eccentricity", Value: at("Brine", 40, "eccentricity") + 3*1e-4, Error: 1e-4, At: -1},
	}
	s := shipped(t, "volcanic-cycle", set("run.span", "40 Myr"))
	s.Observed = list
	h := run1(t, s)
	// The dense output of equal steps is equal to the bit; the division is not.
	near(t, "misfit", h.Misfit, math.Sqrt((4.+1+9)/3), 1e-9)
	near(t, "misfit of Cinder", h.Bodies[0].Misfit, math.Sqrt((4.+1)/2), 1e-9)
	near(t, "misfit of Brine", h.Bodies[1].Misfit, 3, 1e-9)
	if !math.IsNaN(h.Bodies[2].Misfit) {
		t.Errorf("misfit of a body without observations is %g", h.Bodies[2].Misfit)
	}

	// Met before the end, they count in a history that is continued.
	first := shipped(t, "volcanic-cycle", set("run.span", "30 Myr"))
	first.Observed = list
	from := continuation(t, run1(t, first))
	rest, err := Run(context.Background(), s, Options{From: from})
	if err != nil {
		t.Fatal(err)
	}
	// What the other sequence of steps leaves, 1e-6 of e against an error of 4 %.
	near(t, "misfit over two parts", rest.Misfit, h.Misfit, 1e-4)

	s.Observed = []scenarios.Observed{{Body: "Brine", Column: "surface_loss_W", Value: 1, Error: 1, At: -1}}
	if h := run1(t, s); !math.IsNaN(h.Misfit) || len(h.Cautions) != 1 {
		t.Errorf("a column without values: misfit %g, cautions %v", h.Misfit, h.Cautions)
	}
	var columns []string
	for _, c := range bodiesTable.columns {
		if c.float != nil && c.Name != "time_Myr" {
			columns = append(columns, c.Name)
		}
	}
	if !slices.Equal(columns, scenarios.ObservedColumns) {
		t.Errorf("the reader knows the columns %v, the table has %v", scenarios.ObservedColumns, columns)
	}
	s.Observed[0].Column = "surface_loss"
	if _, err := Check(s); err == nil {
		t.Error("a column that does not exist is accepted")
	}
}

// A history of another physics number is not continued.
func TestPhysicsNumberOfAContinuedHistory(t *testing.T) {
	h := run1(t, shipped(t, "quiet-chain", set("run.span", "1 Myr")))
	dir := t.TempDir() + "/other"
	w, err := record.Create(dir, Tables(), record.CreateOptions{})
	if err != nil {
		t.Fatal(err)
	}
	meta := h.meta()
	meta[metaPhysics] = "0"
	if err := h.write(w, meta); err != nil {
		t.Fatal(err)
	}
	if _, err := Load(dir); err == nil {
		t.Error("a dataset of physics number 0 is loaded")
	}
}
