/* CVODE on the cases of the program.
 *
 *   peer CASE check < STATES             right-hand sides and Jacobians
 *   peer CASE time                       seconds for one of each
 *   peer CASE run RTOL ORDER COEF HELP LIMIT SAMPLES
 *
 * run prints: outcome, time reached (s), steps, right-hand sides, Jacobians,
 * Newton failures, error test failures; then CPU seconds of every sample, at most
 * SAMPLES of them and no more once they took 10 ms; then the state reached.
 * COEF 0 leaves CVODE's own. HELP 2 is the analytic Jacobian, the projected
 * start, no tolerance on the odd components and raised limits on failures; 1 is
 * the projected start alone, 0 nothing: the tolerances and a step budget. LIMIT
 * is in CPU seconds of one sample. */
#include "chain.h"

#include <cvode/cvode.h>
#include <nvector/nvector_serial.h>
#include <stdlib.h>
#include <string.h>
#include <sundials/sundials_version.h>
#include <sunlinsol/sunlinsol_dense.h>
#include <sunmatrix/sunmatrix_dense.h>
#include <time.h>

typedef struct {
	double rtol, coef, limit;
	int order, help;
} options_t;

typedef struct {
	const char *outcome;
	double t, cpu, y[DIM];
	long steps, rhs, jacs, newton, errors;
} result_t;

static double cpu(void) {
	struct timespec t;
	clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &t);
	return t.tv_sec + 1e-9 * t.tv_nsec;
}

static int rhs(realtype t, N_Vector y, N_Vector dy, void *user) {
	(void)t;
	return derivs(user, N_VGetArrayPointer(y), N_VGetArrayPointer(dy));
}

static int jac(realtype t, N_Vector y, N_Vector fy, SUNMatrix J, void *user, N_Vector a, N_Vector b, N_Vector c) {
	(void)t, (void)fy, (void)a, (void)b, (void)c;
	double dy[DIM];
	return jacobian(user, N_VGetArrayPointer(y), dy, SUNDenseMatrix_Data(J));
}

/* silent: a failed run is a row of the table, not a message. */
static void silent(int code, const char *module, const char *function, char *message, void *user) {
	(void)code, (void)module, (void)function, (void)message, (void)user;
}

#define CHECK(call)                                                    \
	do {                                                               \
		if ((call) != 0) {                                             \
			fprintf(stderr, "%s:%d: %s failed\n", __FILE__, __LINE__, #call); \
			exit(1);                                                   \
		}                                                              \
	} while (0)

static void integrate(case_t *c, const options_t *o, result_t *r) {
	double begin = cpu();
	SUNContext ctx;
	CHECK(SUNContext_Create(NULL, &ctx));
	N_Vector y = N_VNew_Serial(DIM, ctx), atol = N_VNew_Serial(DIM, ctx);
	memcpy(N_VGetArrayPointer(y), o->help >= 1 ? c->start : c->given, sizeof c->start);
	for (int i = 0; i < DIM; i++)
		N_VGetArrayPointer(atol)[i] = o->help >= 2 && c->odd[i] ? 1e10 : c->atol[i] * o->rtol / c->rtol;
	SUNMatrix A = SUNDenseMatrix(DIM, DIM, ctx);
	SUNLinearSolver ls = SUNLinSol_Dense(y, A, ctx);
	void *m = CVodeCreate(CV_BDF, ctx);
	CHECK(CVodeInit(m, rhs, 0, y));
	CHECK(CVodeSetErrHandlerFn(m, silent, NULL));
	CHECK(CVodeSVtolerances(m, o->rtol, atol));
	CHECK(CVodeSetUserData(m, c));
	CHECK(CVodeSetLinearSolver(m, ls, A));
	CHECK(CVodeSetMaxOrd(m, o->order));
	CHECK(CVodeSetStopTime(m, c->span));
	CHECK(CVodeSetMaxNumSteps(m, 2000)); /* between looks at the clock */
	if (o->coef > 0)
		CHECK(CVodeSetNonlinConvCoef(m, o->coef));
	if (o->help >= 2) {
		CHECK(CVodeSetJacFn(m, jac));
		CHECK(CVodeSetMaxErrTestFails(m, 50));
		CHECK(CVodeSetMaxConvFails(m, 50));
	}
	r->t = 0;
	r->outcome = "timeout";
	while (cpu() - begin < o->limit) {
		int flag = CVode(m, c->span, y, &r->t, CV_NORMAL);
		if (flag == CV_TOO_MUCH_WORK)
			continue;
		r->outcome = flag >= 0 ? "done" : CVodeGetReturnFlagName(flag);
		break;
	}
	long own, extra = 0;
	CHECK(CVodeGetNumSteps(m, &r->steps));
	CHECK(CVodeGetNumRhsEvals(m, &own));
	CHECK(CVodeGetNumLinRhsEvals(m, &extra));
	r->rhs = own + extra;
	CHECK(CVodeGetNumJacEvals(m, &r->jacs));
	CHECK(CVodeGetNumNonlinSolvConvFails(m, &r->newton));
	CHECK(CVodeGetNumErrTestFails(m, &r->errors));
	memcpy(r->y, N_VGetArrayPointer(y), sizeof r->y);
	CVodeFree(&m);
	SUNLinSolFree(ls);
	SUNMatDestroy(A);
	N_VDestroy(y);
	N_VDestroy(atol);
	SUNContext_Free(&ctx);
	r->cpu = cpu() - begin;
}

static int run(case_t *c, char **arg) {
	options_t o = {.rtol = atof(arg[0]), .order = atoi(arg[1]), .coef = atof(arg[2]), .help = atoi(arg[3]), .limit = atof(arg[4])};
	int samples = atoi(arg[5]);
	double spent = 0, times[100];
	int n = 0;
	result_t r;
	while (n < samples && n < 100 && (n < 1 || spent < 0.01)) {
		integrate(c, &o, &r);
		spent += times[n++] = r.cpu;
	}
	printf("%s %.17g %ld %ld %ld %ld %ld\n", r.outcome, r.t, r.steps, r.rhs, r.jacs, r.newton, r.errors);
	for (int i = 0; i < n; i++)
		printf("%.9g ", times[i]);
	printf("\n");
	for (int i = 0; i < DIM; i++)
		printf("%.17g ", r.y[i]);
	printf("\n");
	return 0;
}

static int check(const case_t *c) {
	double y[DIM], dy[DIM], both[DIM], J[DIM * DIM];
	while (scanf("%lf", &y[0]) == 1) {
		for (int i = 1; i < DIM; i++)
			if (scanf("%lf", &y[i]) != 1)
				return 1;
		if (derivs(c, y, dy) || jacobian(c, y, both, J))
			return 1;
		for (int i = 0; i < DIM; i++)
			printf("%.17g ", dy[i]);
		for (int i = 0; i < DIM; i++)
			for (int j = 0; j < DIM; j++)
				printf("%.17g ", J[j * DIM + i]);
		printf("\n");
	}
	return 0;
}

static int timing(const case_t *c) {
	enum { TIMES = 200000, BATCHES = 9 };
	double y[DIM], dy[DIM], J[DIM * DIM], best[2] = {1e9, 1e9};
	memcpy(y, c->start, sizeof y);
	for (int b = 0; b < BATCHES; b++) {
		double t0 = cpu();
		for (int i = 0; i < TIMES; i++) {
			y[H] = c->start[H] + i % 7; /* nothing may be kept between calls */
			derivs(c, y, dy);
		}
		double t1 = cpu();
		for (int i = 0; i < TIMES; i++) {
			y[H] = c->start[H] + i % 7;
			jacobian(c, y, dy, J);
		}
		double t2 = cpu();
		best[0] = t1 - t0 < best[0] ? t1 - t0 : best[0];
		best[1] = t2 - t1 < best[1] ? t2 - t1 : best[1];
	}
	printf("%.9g %.9g\n", best[0] / TIMES, best[1] / TIMES);
	return 0;
}

int main(int n, char **arg) {
	static case_t c;
	if (n == 2 && strcmp(arg[1], "version") == 0) {
		char v[32];
		SUNDIALSGetVersion(v, sizeof v);
		printf("SUNDIALS %s, gcc %s\n", v, __VERSION__);
		return 0;
	}
	if (n < 3 || read_case(arg[1], &c))
		return 2;
	if (strcmp(arg[2], "check") == 0)
		return check(&c);
	if (strcmp(arg[2], "time") == 0)
		return timing(&c);
	if (strcmp(arg[2], "run") == 0 && n == 9)
		return run(&c, arg + 3);
	fprintf(stderr, "usage: see the head of main.c\n");
	return 2;
}
