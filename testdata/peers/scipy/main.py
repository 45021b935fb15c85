"""SciPy on the cases of the program.

    main.py CASE check < STATES              right-hand sides and Jacobians
    main.py CASE time                        seconds for one of each
    main.py CASE run RTOL METHOD HELP LIMIT  one integration

run prints: outcome, time reached (s), steps, right-hand sides, Jacobians, 0, 0;
then its CPU seconds; then the state reached. HELP 1 is the analytic Jacobian,
the projected start and no tolerance on the odd components; 0 the tolerances
alone. LIMIT is in CPU seconds.
"""

import os

os.environ["OPENBLAS_NUM_THREADS"] = "1"

import signal
import sys
import time
import warnings

import numpy
import scipy
from scipy.integrate import solve_ivp

from chain import H, Chain, read_case


def check(chain):
    for line in sys.stdin:
        y = numpy.array([float(v) for v in line.split()])
        print(*(f"{v:.17g}" for v in [*chain.derivs(0, y), *chain.jacobian(0, y).ravel()]))


def timing(case, chain):
    best = []
    y = numpy.array(case["start"])
    for call in chain.derivs, chain.jacobian:
        times = []
        for _ in range(5):
            begin = time.process_time()
            for i in range(500):
                y[H] = case["start"][H] + i % 7
                call(0, y)
            times.append((time.process_time() - begin) / 500)
        best.append(min(times))
    print(*best)


class OutOfTime(Exception):
    pass


def out_of_time(*_):
    raise OutOfTime


def run(case, chain, rtol, method, helped, limit):
    atol = numpy.array(case["atol"]) * rtol / case["rtol"][0]
    options = {}
    if helped:
        atol[numpy.array(case["odd"]) > 0] = 1e10
        options["jac"] = chain.jacobian
    start = case["start" if helped else "given"]
    calls, reached = 0, 0.0

    def derivs(t, y):
        nonlocal calls, reached
        calls, reached = calls + 1, t
        return chain.derivs(t, y)

    signal.signal(signal.SIGPROF, out_of_time)
    signal.setitimer(signal.ITIMER_PROF, limit)
    begin = time.process_time()
    try:
        s = solve_ivp(derivs, (0, case["span"][0]), start, method=method, rtol=rtol, atol=atol, **options)
    except OutOfTime:
        print("timeout", f"{reached:.17g}", 0, calls, 0, 0, 0)
        print(time.process_time() - begin)
        print(*start)
        return
    spent = time.process_time() - begin
    signal.setitimer(signal.ITIMER_PROF, 0)
    print("done" if s.status == 0 else "failed", f"{s.t[-1]:.17g}", len(s.t) - 1, s.nfev, s.njev, 0, 0)
    print(spent)
    print(*(f"{v:.17g}" for v in s.y[:, -1]))


if __name__ == "__main__":
    warnings.simplefilter("ignore")
    if sys.argv[1:] == ["version"]:
        print(f"SciPy {scipy.__version__}, NumPy {numpy.__version__}, Python {sys.version.split()[0]}")
        sys.exit(0)
    case = read_case(sys.argv[1])
    chain = Chain(case)
    command, *arguments = sys.argv[2:]
    if command == "check":
        check(chain)
    elif command == "time":
        timing(case, chain)
    elif command == "run":
        rtol, method, helped, limit = arguments
        run(case, chain, float(rtol), method, helped == "1", float(limit))
    else:
        sys.exit(__doc__)
