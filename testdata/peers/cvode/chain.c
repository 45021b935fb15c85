/* The right-hand side and its analytic derivative. */
#include "chain.h"

#include <math.h>
#include <string.h>

/* terms are the resonant pieces of one pair: H_r = -Re(P + Q). */
typedef struct {
	double p, q, cos, sin, reP, imP, reQ, imQ, ui, uo;
} terms_t;

typedef struct {
	double longitude[N], slope[N], radial[N], offset[PAIRS], c[N], v[N], w[N];
	terms_t pair[PAIRS];
} rates_t;

typedef struct {
	double eta, dEta, mu, dMu, q, dq, qm, dqm;
} rock_t;

typedef struct {
	double raise, raiseU, raiseG, raiseX, pump, pumpU, pumpG, pumpX;
} kick_t;

static inline void longitudes(const case_t *c, const double *y, rates_t *r) {
	for (int k = 0; k < N; k++) {
		double l = y[k], u = 1 + l, x = y[RE + k], v = y[IM + k];
		double w = 1 / u, s = 1 / (u - 0.5 * (x * x + v * v));
		double dn = c->motion[k] * (-l * w) * (1 + w + w * w);
		double f = c->slope[k] * w * w * w * s * s * s;
		r->w[k] = w, r->v[k] = s, r->c[k] = f;
		r->longitude[k] = dn + (f * (w + s) - c->rate_ref[k]);
		r->slope[k] = -f * s;
		r->radial[k] = 0;
	}
	for (int i = 0; i < PAIRS; i++) {
		terms_t *t = &r->pair[i];
		t->ui = 1 + y[i], t->uo = 1 + y[i + 1];
		double xi = y[RE + i], wi = y[IM + i], xo = y[RE + i + 1], wo = y[IM + i + 1];
		t->cos = 1, t->sin = 0;
		if (i > 0) {
			double a = y[ANGLE + i - 1];
			t->cos = c->sign[i] * cos(a), t->sin = c->sign[i] * sin(a);
		}
		double w = 1 / (t->uo * t->uo);
		t->p = c->inner[i] * w / sqrt(t->ui);
		t->q = c->outer[i] * w / sqrt(t->uo);
		t->reP = t->p * (xi * t->cos + wi * t->sin);
		t->imP = t->p * (xi * t->sin - wi * t->cos);
		t->reQ = t->q * (xo * t->cos + wo * t->sin);
		t->imQ = t->q * (xo * t->sin - wo * t->cos);
		r->longitude[i] += 0.5 * t->reP / (t->ui * c->ref[i]);
		r->longitude[i + 1] += (2 * t->reP + 2.5 * t->reQ) / (t->uo * c->ref[i + 1]);
		r->radial[i] += t->reP;
		r->radial[i + 1] += t->reQ;
	}
	for (int i = 0; i < PAIRS; i++)
		r->offset[i] = c->offset + (c->j[i] + 1) * r->longitude[i + 1] - c->j[i] * r->longitude[i];
}

void set_reference(case_t *c) {
	rates_t r;
	memset(c->rate_ref, 0, sizeof c->rate_ref);
	longitudes(c, c->given, &r);
	memcpy(c->rate_ref, r.longitude, sizeof c->rate_ref);
}

static inline void flow(const case_t *c, const double *y, double *dy, rates_t *r) {
	longitudes(c, y, r);
	for (int k = 0; k < N; k++) {
		double turn = -(r->slope[k] + r->offset[0]);
		dy[k] = 0;
		dy[RE + k] = -turn * y[IM + k];
		dy[IM + k] = turn * y[RE + k];
	}
	for (int i = 0; i < PAIRS; i++) {
		const terms_t *t = &r->pair[i];
		double im = t->imP + t->imQ;
		dy[i] += c->j[i] * im / c->ref[i];
		dy[i + 1] -= (c->j[i] + 1) * im / c->ref[i + 1];
		double p = t->p / c->ref[i], q = t->q / c->ref[i + 1];
		dy[RE + i] -= p * t->sin;
		dy[IM + i] += p * t->cos;
		dy[RE + i + 1] -= q * t->sin;
		dy[IM + i + 1] += q * t->cos;
		if (i > 0)
			dy[ANGLE + i - 1] = r->offset[i] - r->offset[0];
	}
}

/* rock evaluates the interior on its partly molten, convecting branch. */
static inline void rock(const case_t *c, double h, rock_t *s) {
	double T = c->solidus + (h - c->heat_capacity * c->solidus) * c->dT;
	double f = (T - c->solidus) / c->width, df = c->dT / c->width;
	double ratio = c->activation / T, slope = -ratio / T, curvature = -2 * slope / T;
	double ln = c->ln_eta + ratio - c->eta_melt * f;
	double dLn = slope * c->dT - c->eta_melt * df;
	s->eta = exp(ln), s->dEta = s->eta * dLn;
	s->mu = c->rigidity * exp(-c->rigidity_melt * f), s->dMu = -c->rigidity_melt * df * s->mu;

	double drop = T - c->surface, scale = -1 / slope;
	double lnQ = c->flux + c->flux_eta * ln + c->flux_scale * log(scale), dDrop = 0;
	if (c->flux_drop != 0) {
		lnQ += c->flux_drop * log(fabs(drop));
		dDrop = c->flux_drop / drop;
	}
	s->q = exp(lnQ);
	s->dq = s->q * ((dDrop + c->flux_scale / scale * curvature * scale * scale) * c->dT + c->flux_eta * dLn);

	double below = 1;
	for (int i = 1; i < c->exponent; i++)
		below *= f;
	double u = c->speed * below * f, du = c->speed * c->exponent * below;
	double content = c->density * (c->latent + c->heat_capacity * drop);
	s->qm = content * u;
	s->dqm = content * du * df + c->density * c->heat_capacity * c->dT * u;
}

/* response returns K(n) = -Im k2 and, if asked, its derivatives to n and h. */
static inline double response(const case_t *c, const rock_t *s, double n, double *dn, double *dh) {
	double stiff = 1 / s->mu, perN = 1 / n, perEta = 1 / s->eta, flow = perEta * perN;
	double creep = stiff * exp(-c->alpha * (log(n * s->eta * stiff) + c->ln_zeta));
	double re = creep * c->phase_re, im = creep * c->phase_im;
	double jr = stiff + re + c->b, ji = im - flow; /* J* + B */
	double norm = 1 / (jr * jr + ji * ji);
	double k = -1.5 * c->b * ji * norm;
	if (dn) {
		double ir = jr * norm, ii = -ji * norm;
		double sr = 1.5 * c->b * (ir * ir - ii * ii), si = 3 * c->b * ir * ii; /* dk2/dJ* */
		double byRe = -c->alpha * re, byIm = flow - c->alpha * im;             /* to ln n and ln eta */
		double muRe = -stiff * (stiff + (1 - c->alpha) * re), muIm = -stiff * (1 - c->alpha) * im;
		double turn = -(sr * byIm + si * byRe);
		*dn = turn * perN;
		*dh = -(sr * muIm + si * muRe) * s->dMu + turn * perEta * s->dEta;
	}
	return k;
}

/* tide fills the kick of the synchronous tide; 1 outside the polynomials. */
static inline int tide(const case_t *c, const double *y, const rock_t *s, kick_t *t, int all) {
	double x = y[RE], v = y[IM], g = 0.5 * (x * x + v * v), p = 1 / (1 + y[0]);
	double ratio = g * p, e2 = ratio * (2 - ratio);
	if (!(e2 <= c->top))
		return 1;
	double n = c->motion[0] * p * p * p, p6 = p * p * p * p * p * p;
	double scale = c->scale * p6 * p6, shape = 0.5 * (2 - ratio) * p, z = e2 / c->top;
	double sum = 0, sumE = 0, sumN = 0, sumX = 0;
	for (int j = 0; j < c->harmonics && (j == 0 || e2 >= c->from[j]); j++) {
		const double *a = c->poly[j];
		double f = j + 1;
		double sj = a[0] + z * (a[1] + z * (a[2] + z * (a[3] + z * (a[4] + z * a[5]))));
		if (!all) {
			sum += sj * response(c, s, f * n, NULL, NULL);
			continue;
		}
		double ds = (a[1] + z * (2 * a[2] + z * (3 * a[3] + z * (4 * a[4] + z * 5 * a[5])))) / c->top;
		double dn, dh, k = response(c, s, f * n, &dn, &dh);
		sum += sj * k;
		sumE += ds * k;
		sumN += sj * f * dn;
		sumX += sj * dh;
	}
	double gamma = scale * shape * sum;
	t->raise = -2 * g * gamma, t->pump = -gamma;
	if (!all)
		return 0;
	double ratioU = -ratio * p, eU = (2 - 2 * ratio) * ratioU, eG = (2 - 2 * ratio) * p;
	double shapeU = 0.5 * (-ratioU - (2 - ratio) * p) * p, shapeG = -0.5 * p * p;
	double gammaU = -12 * p * gamma + scale * (shapeU * sum + shape * (sumE * eU - 3 * n * p * sumN));
	double gammaG = scale * (shapeG * sum + shape * sumE * eG);
	t->raiseU = -2 * g * gammaU, t->raiseG = -2 * (gamma + g * gammaG);
	t->pumpU = -gammaU, t->pumpG = -gammaG;
	t->pumpX = -scale * shape * sumX, t->raiseX = 2 * g * t->pumpX;
	return 0;
}

/* coupled adds tides and interior to the flow. */
static inline int coupled(const case_t *c, const double *y, double *dy, rates_t *r, rock_t *s, kick_t *t, int all) {
	flow(c, y, dy, r);
	rock(c, y[H], s);
	if (tide(c, y, s, t, all))
		return 1;
	dy[0] += t->raise;
	dy[RE] += t->pump * y[RE];
	dy[IM] += t->pump * y[IM];
	for (int k = 0; k < N; k++) {
		double p = r->w[k], p6 = p * p * p * p * p * p;
		dy[k] += c->push[k] * p6 * p6;
	}
	double g = 0.5 * (y[RE] * y[RE] + y[IM] * y[IM]);
	double longitude = c->motion[0] + c->rate_ref[0] + r->longitude[0];
	double heat = -(c->ref[0] * t->raise * longitude + t->pump * (2 * g * c->ref[0] * r->slope[0] - r->radial[0]));
	dy[H] = (heat + c->mass * c->radiogenic - c->area * (s->q + s->qm)) / c->mass;
	return 0;
}

int derivs(const case_t *c, const double *y, double *dy) {
	rates_t r;
	rock_t s;
	kick_t t;
	return coupled(c, y, dy, &r, &s, &t, 0);
}

#define J(i, j) jac[(j) * DIM + (i)]

/* spread adds d(dlambda_k/dt)/dy[col] to every row dlambda_k/dt enters. */
static inline void spread_offset(const double *y, double *jac, int i, int col, double value) {
	if (i > 0) {
		J(ANGLE + i - 1, col) += value;
		return;
	}
	for (int s = 1; s < PAIRS; s++)
		J(ANGLE + s - 1, col) -= value;
	for (int k = 0; k < N; k++) {
		J(RE + k, col) += value * y[IM + k];
		J(IM + k, col) -= value * y[RE + k];
	}
}

static inline void spread(const case_t *c, const double *y, double *jac, int k, int col, double value) {
	if (k < PAIRS)
		spread_offset(y, jac, k, col, -c->j[k] * value);
	if (k > 0)
		spread_offset(y, jac, k - 1, col, (c->j[k - 1] + 1) * value);
}

static inline void pair_jacobian(const case_t *c, const double *y, double *jac, const terms_t *t, int i) {
	int o = i + 1, xi = RE + i, wi = IM + i, xo = RE + o, wo = IM + o, a = ANGLE + i - 1;
	double in = c->ref[i], out = c->ref[o];
	double pc = t->p * t->cos, ps = t->p * t->sin, qc = t->q * t->cos, qs = t->q * t->sin;
	for (int side = 0; side < 2; side++) {
		int row = side ? o : i;
		double f = side ? -(c->j[i] + 1) / out : c->j[i] / in;
		J(row, i) -= f * 0.5 * t->imP / t->ui;
		J(row, o) -= f * (2 * t->imP + 2.5 * t->imQ) / t->uo;
		J(row, xi) += f * ps;
		J(row, wi) -= f * pc;
		J(row, xo) += f * qs;
		J(row, wo) -= f * qc;
		if (i > 0)
			J(row, a) += f * (t->reP + t->reQ);
	}
	double p = t->p / in, q = t->q / out;
	J(xi, i) += 0.5 * p * t->sin / t->ui;
	J(wi, i) -= 0.5 * p * t->cos / t->ui;
	J(xi, o) += 2 * p * t->sin / t->uo;
	J(wi, o) -= 2 * p * t->cos / t->uo;
	J(xo, o) += 2.5 * q * t->sin / t->uo;
	J(wo, o) -= 2.5 * q * t->cos / t->uo;
	if (i > 0) {
		J(xi, a) -= p * t->cos;
		J(wi, a) -= p * t->sin;
		J(xo, a) -= q * t->cos;
		J(wo, a) -= q * t->sin;
	}
	double f = 1 / (in * t->ui), g = 1 / (out * t->uo);
	spread(c, y, jac, i, i, -0.75 * f * t->reP / t->ui);
	spread(c, y, jac, i, o, -f * t->reP / t->uo);
	spread(c, y, jac, i, xi, 0.5 * f * pc);
	spread(c, y, jac, i, wi, 0.5 * f * ps);
	spread(c, y, jac, o, i, -g * t->reP / t->ui);
	spread(c, y, jac, o, o, -g * (6 * t->reP + 8.75 * t->reQ) / t->uo);
	spread(c, y, jac, o, xi, 2 * g * pc);
	spread(c, y, jac, o, wi, 2 * g * ps);
	spread(c, y, jac, o, xo, 2.5 * g * qc);
	spread(c, y, jac, o, wo, 2.5 * g * qs);
	if (i > 0) {
		spread(c, y, jac, i, a, -0.5 * f * t->imP);
		spread(c, y, jac, o, a, -g * (2 * t->imP + 2.5 * t->imQ));
	}
}

/* interior_row writes dh'/dy: the heat is what the innermost orbit loses. */
static inline void interior_row(const case_t *c, const double *y, double *jac, const rates_t *r, const rock_t *s,
                                const kick_t *t, double rateU, double rateG, double slopeU, double slopeG) {
	const terms_t *e = &r->pair[0];
	double x = y[RE], v = y[IM], g = 0.5 * (x * x + v * v), p = r->w[0], ref = c->ref[0];
	double longitude = c->motion[0] + c->rate_ref[0] + r->longitude[0];
	double radial = 2 * g * ref * r->slope[0] - r->radial[0];
	double scale = -1 / c->mass, wr = scale * ref * longitude, wp = scale * radial;
	double a = scale * ref * t->raise, b = scale * t->pump;
	double gradG = wr * t->raiseG + wp * t->pumpG + a * rateG + b * 2 * ref * (r->slope[0] + g * slopeG);
	double h = a * 0.5 * p / ref, f = h - b;
	J(H, 0) += wr * t->raiseU + wp * t->pumpU + a * (-3 * c->motion[0] * p * p * p * p + rateU) +
	           b * 2 * g * ref * slopeU - h * e->reP * p - f * 0.5 * e->reP / e->ui;
	J(H, 1) -= f * 2 * e->reP / e->uo;
	J(H, RE) += gradG * x + f * e->p;
	J(H, IM) += gradG * v;
	J(H, H) += wr * t->raiseX + wp * t->pumpX - c->area * (s->dq + s->dqm) / c->mass;
}

int jacobian(const case_t *c, const double *y, double *dy, double *jac) {
	rates_t r;
	rock_t s;
	kick_t t;
	if (coupled(c, y, dy, &r, &s, &t, 1))
		return 1;
	memset(jac, 0, DIM * DIM * sizeof *jac);
	for (int k = 0; k < N; k++) {
		double x = y[RE + k], v = y[IM + k], w = r.w[k], V = r.v[k], f = r.c[k];
		double rateU = -f * (4 * w * w + 6 * w * V + 4 * V * V), rateG = f * (3 * w * V + 4 * V * V);
		double slopeU = f * V * (3 * w + 4 * V), slopeG = -4 * f * V * V;
		spread(c, y, jac, k, k, -3 * c->motion[k] * w * w * w * w + rateU);
		spread(c, y, jac, k, RE + k, rateG * x);
		spread(c, y, jac, k, IM + k, rateG * v);
		double turn = r.slope[k] + r.offset[0];
		J(RE + k, k) += slopeU * v;
		J(IM + k, k) -= slopeU * x;
		J(RE + k, RE + k) += slopeG * x * v;
		J(RE + k, IM + k) += slopeG * v * v + turn;
		J(IM + k, RE + k) -= slopeG * x * x + turn;
		J(IM + k, IM + k) -= slopeG * v * x;
		double p6 = w * w * w * w * w * w;
		J(k, k) += -12 * w * c->push[k] * p6 * p6;
		if (k == 0)
			interior_row(c, y, jac, &r, &s, &t, rateU, rateG, slopeU, slopeG);
	}
	for (int i = 0; i < PAIRS; i++)
		pair_jacobian(c, y, jac, &r.pair[i], i);
	double x = y[RE], v = y[IM];
	J(0, 0) += t.raiseU, J(0, RE) += t.raiseG * x, J(0, IM) += t.raiseG * v, J(0, H) += t.raiseX;
	J(RE, 0) += t.pumpU * x, J(RE, RE) += t.pumpG * x * x + t.pump, J(RE, IM) += t.pumpG * x * v, J(RE, H) += t.pumpX * x;
	J(IM, 0) += t.pumpU * v, J(IM, RE) += t.pumpG * x * v, J(IM, IM) += t.pumpG * v * v + t.pump, J(IM, H) += t.pumpX * v;
	return 0;
}
