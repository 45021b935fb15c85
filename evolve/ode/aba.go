package ode

// The symmetric composition ABA(8,6,4) of Blanes, Casas, Farrés, Laskar,
// Makazaga & Murua (2013, Appl. Numer. Math. 68, 58),
//
//	Φ_h = A(a₁h) B(b₁h) A(a₂h) … B(b₄h) … A(a₂h) B(b₁h) A(a₁h),
//
// for y' = A + εB: its error is of order εh⁸ + ε²h⁶ + ε³h⁴ per unit of time
// (coefficients from memory, the orders proven in the tests).
var (
	abaA = [4]float64{
		0.0711334264982231177779387300061549964174,
		0.241153427956640098736487795326289649618,
		0.521411761772814789212136078067994229991,
		-0.333698616227678005726562603400438876027,
	}
	abaB = [4]float64{
		0.183083687472197221961703757166430291072,
		0.310782859898574869507522291054262796375,
		-0.0265646185119588006972121379164987592663,
		0.0653961422823734184559721793911134363710,
	}
)

// abaStages is the number of B; there is one A more.
const abaStages = 7

// abaMirror returns the index of a coefficient in the first half of the
// symmetric list of n.
func abaMirror(i, n int) int { return min(i, n-1-i) }
