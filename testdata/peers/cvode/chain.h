/* The right-hand side of the two cases, port of the program's formulas. SI. */
#ifndef CHAIN_H
#define CHAIN_H

#include <stdio.h>

enum { N = 3, PAIRS = N - 1, RE = N, IM = 2 * N, ANGLE = 3 * N, H = 4 * N - 2, DIM = 4 * N - 1 };
enum { MAX_HARMONICS = 16, DEGREE = 5 };

/* case_t holds the constants of the file and what follows from them. */
typedef struct {
	double span, rtol, atol[DIM], odd[DIM], given[DIM], start[DIM];

	/* orbits */
	double ref[N], motion[N], slope[N], push[N]; /* slope: 3b, rad/s */
	double rate_ref[N];                          /* oblate and resonant part of dlambda/dt at the lock */
	double offset, j[PAIRS], inner[PAIRS], outer[PAIRS], sign[PAIRS];
	double scale; /* of the synchronous tide, 1/s */
	int harmonics;
	double top, from[MAX_HARMONICS], poly[MAX_HARMONICS][DEGREE + 1];

	/* interior */
	double mass, area, radiogenic, surface, heat_capacity, latent, solidus, density;
	double dT, width;                         /* of T(h) while partly molten */
	double ln_eta, activation, eta_melt;      /* ln eta = ln_eta + activation/T - eta_melt f */
	double rigidity, rigidity_melt;
	double alpha, ln_zeta, phase_re, phase_im; /* Andrade; phase = Gamma(1+alpha) i^-alpha */
	double b;                                  /* 19/(2 rho g R) */
	double flux, flux_drop, flux_scale, flux_eta; /* powers of the convective flux */
	double speed;
	int exponent;
} case_t;

/* set_reference completes the constants of the orbits: at the lock, where
   l = 0, dlambda/dt is the reference by definition. */
void set_reference(case_t *c);

/* read_case returns 0 and fills c, or prints what is wrong. */
int read_case(const char *path, case_t *c);

/* derivs writes dy/dt; jacobian also its derivative, entry (i, j) at
   jac[j*DIM + i]. Both return 1 outside the domain of the port. */
int derivs(const case_t *c, const double *y, double *dy);
int jacobian(const case_t *c, const double *y, double *dy, double *jac);

#endif
