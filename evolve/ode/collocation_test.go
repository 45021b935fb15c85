package ode

import (
	"math"
	"testing"
)

// The sums below have at most 5 terms of size ≤ 1 (errWeights: ≤ 28), so
// rounding leaves a few 1e-16 times the condition of the tables, below 1e-14.
const tableRounding = 1e-14

func tableaus() map[string]*tableau {
	return map[string]*tableau{"3 stages": radau3(), "5 stages": radau5()}
}

// Simplifying assumptions B(2s−1) and C(s), from which order 2s − 1 follows
// (Hairer & Wanner II, IV.5, theorem 5.1).
func TestCollocationConditions(t *testing.T) {
	for name, tab := range tableaus() {
		s := tab.s
		for k := 1; k <= 2*s-1; k++ {
			sum := 0.0
			for j := range s {
				sum += tab.a[s-1][j] * math.Pow(tab.c[j], float64(k-1))
			}
			if d := math.Abs(sum - 1/float64(k)); d > tableRounding {
				t.Errorf("%s: B(%d) fails by %g", name, k, d)
			}
		}
		for i := range s {
			for k := 1; k <= s; k++ {
				sum := 0.0
				for j := range s {
					sum += tab.a[i][j] * math.Pow(tab.c[j], float64(k-1))
				}
				if d := math.Abs(sum - math.Pow(tab.c[i], float64(k))/float64(k)); d > tableRounding {
					t.Errorf("%s: C(%d) of stage %d fails by %g", name, k, i, d)
				}
			}
		}
	}
}

// c of three stages is (4 ∓ √6)/10 and 1, and the error weights are
// −(13 ± 7√6)/3 and −1/3 (Hairer & Wanner II, IV.5 and IV.8; from memory).
func TestThreeStageTable(t *testing.T) {
	tab, root6 := radau3(), math.Sqrt(6)
	for i, want := range []float64{(4 - root6) / 10, (4 + root6) / 10, 1} {
		if d := math.Abs(tab.c[i] - want); d > tableRounding {
			t.Errorf("c[%d] off by %g", i, d)
		}
	}
	for i, want := range []float64{-(13 + 7*root6) / 3, (-13 + 7*root6) / 3, -1.0 / 3} {
		if d := math.Abs(tab.errWeights[i] - want); d > 10*tableRounding {
			t.Errorf("error weight %d off by %g", i, d)
		}
	}
}

// t Λ⁻¹ t⁻¹ = a, and R(∞) = 1 − bᵀa⁻¹1 = 0: with a⁻¹c = 1 from row sums, the latter
// is that b is the last row of a.
func TestTransformation(t *testing.T) {
	for name, tab := range tableaus() {
		s := tab.s
		limit := 1.0
		for j := range s {
			var x [maxStages]float64
			x[0] = tab.tinv[0][j] / tab.gamma
			for p := range s / 2 {
				a, b := tab.alpha[p], tab.beta[p]
				u, v := tab.tinv[1+2*p][j], tab.tinv[2+2*p][j]
				x[1+2*p], x[2+2*p] = (a*u-b*v)/(a*a+b*b), (b*u+a*v)/(a*a+b*b)
			}
			for i := range s {
				sum := 0.0
				for k := range s {
					sum += tab.t[i][k] * x[k]
				}
				if d := math.Abs(sum - tab.a[i][j]); d > tableRounding {
					t.Errorf("%s: transformed a[%d][%d] off by %g", name, i, j, d)
				}
			}
		}
		// bᵀa⁻¹1 = Σ_k (bᵀt Λ t⁻¹1)_k.
		var v, w [maxStages]float64
		for k := range s {
			for j := range s {
				v[k] += tab.tinv[k][j]
			}
		}
		w[0] = tab.gamma * v[0]
		for p := range s / 2 {
			a, b := tab.alpha[p], tab.beta[p]
			w[1+2*p], w[2+2*p] = a*v[1+2*p]+b*v[2+2*p], -b*v[1+2*p]+a*v[2+2*p]
		}
		for j := range s {
			for k := range s {
				limit -= tab.a[s-1][j] * tab.t[j][k] * w[k]
			}
		}
		// |Λ| and |t⁻¹| reach 6 and 20: some 100 roundings.
		if math.Abs(limit) > 10*tableRounding {
			t.Errorf("%s: R(∞) = %g", name, limit)
		}
	}
}

// The embedded formula has order s: with f = t^(k−1), z_i = c_i^k/k, the estimate
// f₀ + Σ e_i z_i vanishes for k = 1…s.
func TestErrorWeights(t *testing.T) {
	for name, tab := range tableaus() {
		for k := 1; k <= tab.s; k++ {
			sum := 0.0
			if k == 1 {
				sum = 1
			}
			for i, c := range tab.c[:tab.s] {
				sum += tab.errWeights[i] * math.Pow(c, float64(k)) / float64(k)
			}
			if math.Abs(sum) > 28*tableRounding {
				t.Errorf("%s: estimate of degree %d is %g", name, k, sum)
			}
		}
	}
}
