/* Reading the constants of a case. */
#include "chain.h"

#include <math.h>
#include <string.h>

enum { MAX_VALUES = 128, MAX_ENTRIES = 96 };

typedef struct {
	char name[64];
	int n;
	double value[MAX_VALUES];
} entry_t;

static entry_t entries[MAX_ENTRIES];
static int entry_count, missing;

static const entry_t *find(const char *name) {
	for (int i = 0; i < entry_count; i++)
		if (strcmp(entries[i].name, name) == 0)
			return &entries[i];
	fprintf(stderr, "the case has no %s\n", name);
	missing++;
	return NULL;
}

static double number(const char *name) {
	const entry_t *e = find(name);
	return e ? e->value[0] : NAN;
}

static void list(const char *name, double *to, int n) {
	const entry_t *e = find(name);
	if (e && e->n != n) {
		fprintf(stderr, "%s has %d values, not %d\n", name, e->n, n);
		missing++;
	} else if (e)
		memcpy(to, e->value, n * sizeof *to);
}

static int parse(const char *path) {
	FILE *f = fopen(path, "r");
	if (!f) {
		perror(path);
		return 1;
	}
	while (entry_count < MAX_ENTRIES) {
		entry_t *e = &entries[entry_count];
		int got = fscanf(f, "%63s %d", e->name, &e->n);
		if (got == EOF)
			break;
		if (got != 2 || e->n < 0 || e->n > MAX_VALUES) {
			fprintf(stderr, "%s: entry %d is not NAME COUNT VALUES\n", path, entry_count);
			fclose(f);
			return 1;
		}
		for (int i = 0; i < e->n; i++)
			if (fscanf(f, "%lf", &e->value[i]) != 1) {
				fprintf(stderr, "%s: value %d of %s is missing\n", path, i, e->name);
				fclose(f);
				return 1;
			}
		entry_count++;
	}
	fclose(f);
	return 0;
}

static void read_orbits(case_t *c) {
	list("reference_action", c->ref, N);
	list("reference_motion", c->motion, N);
	list("oblate_slope", c->slope, N);
	list("central_push", c->push, N);
	c->offset = number("offset");
	list("commensurability", c->j, PAIRS);
	list("inner_coupling", c->inner, PAIRS);
	list("outer_coupling", c->outer, PAIRS);
	list("centre_sign", c->sign, PAIRS);
	c->scale = number("synchronous_scale");
	c->top = number("harmonic_top");
	const entry_t *from = find("harmonic_from");
	c->harmonics = from ? from->n : 0;
	if (c->harmonics > MAX_HARMONICS) {
		fprintf(stderr, "%d harmonics are too many\n", c->harmonics);
		missing++;
		return;
	}
	list("harmonic_from", c->from, c->harmonics);
	list("harmonic_coefficients", &c->poly[0][0], c->harmonics * (DEGREE + 1));
}

static void read_interior(case_t *c) {
	const double pi = acos(-1);
	double radius = number("radius"), G = number("gravitation"), R = number("gas_constant");
	double liquidus = number("liquidus"), k = number("conductivity"), expansivity = number("expansivity");
	c->mass = number("mass");
	c->area = 4 * pi * radius * radius;
	c->radiogenic = number("radiogenic");
	c->surface = number("surface_temperature");
	c->heat_capacity = number("heat_capacity");
	c->latent = number("latent_heat");
	c->solidus = number("solidus");
	c->width = liquidus - c->solidus;
	c->dT = 1 / (c->heat_capacity + c->latent / c->width);
	c->density = c->mass / (4 * pi / 3 * radius * radius * radius);
	double gravity = G * c->mass / (radius * radius);
	c->b = 19 / (2 * c->density * gravity * radius);

	c->activation = number("viscosity.activation_energy") / R;
	c->ln_eta = log(number("viscosity.reference")) - c->activation / number("viscosity.at");
	c->eta_melt = number("viscosity.melt_exponent");
	c->rigidity = number("rheology.rigidity");
	c->rigidity_melt = number("rheology.melt_exponent");
	c->alpha = number("rheology.alpha");
	c->ln_zeta = log(number("rheology.zeta"));
	c->phase_re = tgamma(1 + c->alpha) * cos(c->alpha * pi / 2);
	c->phase_im = -tgamma(1 + c->alpha) * sin(c->alpha * pi / 2);

	/* q = (k/D) dT C theta^-g Ra^beta as powers of the drop, the scale and eta. */
	double theta = number("convection.theta_exponent"), beta = number("convection.rayleigh_exponent");
	double diffusivity = k / (c->density * c->heat_capacity);
	c->flux = log(number("convection.coefficient") * k / radius) +
	          beta * log(c->density * gravity * expansivity * radius * radius * radius / diffusivity);
	c->flux_drop = 1 - theta + beta;
	if (fabs(c->flux_drop) < 1e-12)
		c->flux_drop = 0;
	c->flux_scale = theta;
	c->flux_eta = -beta;
	c->speed = number("melt_loss.velocity");
	double exponent = number("melt_loss.exponent");
	c->exponent = (int)exponent;
	if (c->exponent != exponent || c->exponent < 1) {
		fprintf(stderr, "melt_loss.exponent %g is not a whole number\n", exponent);
		missing++;
	}
}

int read_case(const char *path, case_t *c) {
	if (parse(path))
		return 1;
	c->span = number("span");
	c->rtol = number("rtol");
	list("atol", c->atol, DIM);
	list("odd", c->odd, DIM);
	list("given", c->given, DIM);
	list("start", c->start, DIM);
	read_orbits(c);
	read_interior(c);
	if (missing)
		return 1;
	set_reference(c);
	return 0;
}
