package thermal

// Rates implements [Interior].
func (r *rock) Rates(_, heat float64, dx []float64) {
	dx[0] = (heat + r.mass*r.radiogenic - r.area*(r.now.q+r.now.qm)) / r.mass
}

// RatesDerivs implements [Interior].
func (r *rock) RatesDerivs(_, _ float64, dxdx, dxdheat []float64) {
	dxdx[0] = -r.area * (r.now.dq + r.now.dqm) / r.mass
	dxdheat[0] = 1 / r.mass
}

// Balance implements [Interior].
func (r *rock) Balance(float64) Balance {
	return Balance{
		SurfaceLoss:    r.area * (r.now.q + r.now.qm),
		ConvectiveLoss: r.area * r.now.q,
		MeltLoss:       r.area * r.now.qm,
		RadiogenicHeat: r.mass * r.radiogenic,
		Energy:         r.mass * r.now.h,
	}
}

// Snapshot implements [Interior].
func (r *rock) Snapshot() Snapshot {
	s := &r.now
	return Snapshot{
		Temperature:  Value{s.T, true},
		MeltFraction: Value{min(max(s.f, 0), 1), true},
		Viscosity:    Value{s.eta, true},
		Rigidity:     Value{s.mu, true},
	}
}
