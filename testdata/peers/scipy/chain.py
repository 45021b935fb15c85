"""The right-hand side of the cases and its analytic derivative, in plain Python.

Scalars are Python floats: for eleven state variables that is several times
faster than arrays.
"""

import math

import numpy

N = 3
RE, IM, ANGLE, H, DIM = N, 2 * N, 3 * N, 4 * N - 2, 4 * N - 1


def read_case(path):
    """The constants of the file: a number, or a list where there are several."""
    case = {}
    with open(path) as lines:
        for line in lines:
            name, count, *values = line.split()
            if len(values) != int(count):
                raise ValueError(f"{path}: {name} has {len(values)} values, not {count}")
            case[name] = [float(v) for v in values]
    return case


class Chain:
    def __init__(self, case):
        def one(name):
            return case[name][0]

        self.ref, self.motion = case["reference_action"], case["reference_motion"]
        self.b3, self.push = case["oblate_slope"], case["central_push"]
        self.offset, self.j = one("offset"), case["commensurability"]
        self.inner, self.outer, self.sign = case["inner_coupling"], case["outer_coupling"], case["centre_sign"]
        self.scale, self.top = one("synchronous_scale"), one("harmonic_top")
        poly = case["harmonic_coefficients"]
        degree = len(poly) // len(case["harmonic_from"])
        self.harmonics = [
            (float(j + 1), least, poly[j * degree : (j + 1) * degree]) for j, least in enumerate(case["harmonic_from"])
        ]

        radius, self.mass = one("radius"), one("mass")
        self.area = 4 * math.pi * radius**2
        self.radiogenic, self.surface = one("radiogenic"), one("surface_temperature")
        self.cp, self.latent, self.solidus = one("heat_capacity"), one("latent_heat"), one("solidus")
        self.width = one("liquidus") - self.solidus
        self.dT = 1 / (self.cp + self.latent / self.width)
        self.density = self.mass / (4 * math.pi / 3 * radius**3)
        gravity = one("gravitation") * self.mass / radius**2
        self.b = 19 / (2 * self.density * gravity * radius)
        self.activation = one("viscosity.activation_energy") / one("gas_constant")
        self.ln_eta = math.log(one("viscosity.reference")) - self.activation / one("viscosity.at")
        self.eta_melt = one("viscosity.melt_exponent")
        self.rigidity, self.rigidity_melt = one("rheology.rigidity"), one("rheology.melt_exponent")
        self.alpha, self.ln_zeta = one("rheology.alpha"), math.log(one("rheology.zeta"))
        gamma = math.gamma(1 + self.alpha)
        self.phase_re = gamma * math.cos(self.alpha * math.pi / 2)
        self.phase_im = -gamma * math.sin(self.alpha * math.pi / 2)
        theta, beta, k = one("convection.theta_exponent"), one("convection.rayleigh_exponent"), one("conductivity")
        diffusivity = k / (self.density * self.cp)
        self.flux = math.log(one("convection.coefficient") * k / radius) + beta * math.log(
            self.density * gravity * one("expansivity") * radius**3 / diffusivity
        )
        drop = 1 - theta + beta
        self.flux_drop = 0.0 if abs(drop) < 1e-12 else drop
        self.flux_scale, self.flux_eta = theta, -beta
        self.speed, self.exponent = one("melt_loss.velocity"), one("melt_loss.exponent")

        self.rate_ref = [0.0] * N
        self.rate_ref = self.longitudes(case["given"])["longitude"]

    def longitudes(self, y):
        """dlambda/dt less its reference, dpsi/dt and the terms of every pair."""
        w, v, c, longitude, slope, radial, pairs = [], [], [], [], [], [0.0] * N, []
        for k in range(N):
            l, re, im = y[k], y[RE + k], y[IM + k]
            wk = 1 / (1 + l)
            vk = 1 / (1 + l - 0.5 * (re * re + im * im))
            ck = self.b3[k] * wk * wk * wk * vk * vk * vk
            w.append(wk)
            v.append(vk)
            c.append(ck)
            longitude.append(self.motion[k] * (-l * wk) * (1 + wk + wk * wk) + (ck * (wk + vk) - self.rate_ref[k]))
            slope.append(-ck * vk)
        for i in range(N - 1):
            o = i + 1
            ui, uo = 1 + y[i], 1 + y[o]
            cos, sin = 1.0, 0.0
            if i > 0:
                a = y[ANGLE + i - 1]
                cos, sin = self.sign[i] * math.cos(a), self.sign[i] * math.sin(a)
            p = self.inner[i] / (uo * uo) / math.sqrt(ui)
            q = self.outer[i] / (uo * uo) / math.sqrt(uo)
            rep, imp = p * (y[RE + i] * cos + y[IM + i] * sin), p * (y[RE + i] * sin - y[IM + i] * cos)
            req, imq = q * (y[RE + o] * cos + y[IM + o] * sin), q * (y[RE + o] * sin - y[IM + o] * cos)
            longitude[i] += 0.5 * rep / (ui * self.ref[i])
            longitude[o] += (2 * rep + 2.5 * req) / (uo * self.ref[o])
            radial[i] += rep
            radial[o] += req
            pairs.append((p, q, cos, sin, rep, imp, req, imq, ui, uo))
        offset = [
            self.offset + (self.j[i] + 1) * longitude[i + 1] - self.j[i] * longitude[i] for i in range(N - 1)
        ]
        return dict(w=w, v=v, c=c, longitude=longitude, slope=slope, radial=radial, pairs=pairs, offset=offset)

    def flow(self, y):
        r = self.longitudes(y)
        offset = r["offset"]
        dy = [0.0] * DIM
        for k in range(N):
            turn = -(r["slope"][k] + offset[0])
            dy[RE + k] = -turn * y[IM + k]
            dy[IM + k] = turn * y[RE + k]
        for i, (p, q, cos, sin, _, imp, _, imq, _, _) in enumerate(r["pairs"]):
            im = imp + imq
            dy[i] += self.j[i] * im / self.ref[i]
            dy[i + 1] -= (self.j[i] + 1) * im / self.ref[i + 1]
            p, q = p / self.ref[i], q / self.ref[i + 1]
            dy[RE + i] -= p * sin
            dy[IM + i] += p * cos
            dy[RE + i + 1] -= q * sin
            dy[IM + i + 1] += q * cos
            if i > 0:
                dy[ANGLE + i - 1] = offset[i] - offset[0]
        return dy, r

    def rock(self, h):
        """The interior on its partly molten, convecting branch."""
        T = self.solidus + (h - self.cp * self.solidus) * self.dT
        f, df = (T - self.solidus) / self.width, self.dT / self.width
        ratio = self.activation / T
        slope = -ratio / T
        curvature = -2 * slope / T
        ln = self.ln_eta + ratio - self.eta_melt * f
        d_ln = slope * self.dT - self.eta_melt * df
        eta, mu = math.exp(ln), self.rigidity * math.exp(-self.rigidity_melt * f)
        drop, scale = T - self.surface, -1 / slope
        ln_q = self.flux + self.flux_eta * ln + self.flux_scale * math.log(scale)
        by_drop = 0.0
        if self.flux_drop:
            ln_q += self.flux_drop * math.log(abs(drop))
            by_drop = self.flux_drop / drop
        q = math.exp(ln_q)
        dq = q * ((by_drop + self.flux_scale / scale * curvature * scale * scale) * self.dT + self.flux_eta * d_ln)
        below = f ** (self.exponent - 1)
        u, du = self.speed * below * f, self.speed * self.exponent * below
        content = self.density * (self.latent + self.cp * drop)
        return dict(
            eta=eta, d_eta=eta * d_ln, mu=mu, d_mu=-self.rigidity_melt * df * mu, q=q, dq=dq,
            qm=content * u, dqm=content * du * df + self.density * self.cp * self.dT * u,
        )  # fmt: skip

    def response(self, s, n, derive):
        """K(n) = -Im k2 and its derivatives to n and to the enthalpy."""
        eta, mu = s["eta"], s["mu"]
        stiff, flow = 1 / mu, 1 / (eta * n)
        creep = stiff * math.exp(-self.alpha * (math.log(n * eta * stiff) + self.ln_zeta))
        re, im = creep * self.phase_re, creep * self.phase_im
        jr, ji = stiff + re + self.b, im - flow
        norm = 1 / (jr * jr + ji * ji)
        k = -1.5 * self.b * ji * norm
        if not derive:
            return k
        ir, ii = jr * norm, -ji * norm
        sr, si = 1.5 * self.b * (ir * ir - ii * ii), 3 * self.b * ir * ii
        turn = -(sr * (flow - self.alpha * im) - si * self.alpha * re)
        by_mu = -(-sr * stiff * (1 - self.alpha) * im - si * stiff * (stiff + (1 - self.alpha) * re))
        return k, turn / n, by_mu * s["d_mu"] + turn / eta * s["d_eta"]

    def tide(self, y, s, derive):
        """Raise and pump of the synchronous tide, with derivatives to u, g and h.

        Beyond the polynomials, where no path of the cases leads, S_j/e^2 stays as
        it is at their end, so that a method may look there.
        """
        re, im = y[RE], y[IM]
        g, p = 0.5 * (re * re + im * im), 1 / (1 + y[0])
        ratio = g * p
        e2 = ratio * (2 - ratio)
        n, scale, shape, z = self.motion[0] * p**3, self.scale * p**12, 0.5 * (2 - ratio) * p, min(e2 / self.top, 1.0)
        total = by_e = by_n = by_h = 0.0
        for j, least, a in self.harmonics:
            if j > 1 and e2 < least:
                break
            sj = a[0] + z * (a[1] + z * (a[2] + z * (a[3] + z * (a[4] + z * a[5]))))
            if not derive:
                total += sj * self.response(s, j * n, False)
                continue
            ds = (a[1] + z * (2 * a[2] + z * (3 * a[3] + z * (4 * a[4] + z * 5 * a[5])))) / self.top
            k, dn, dh = self.response(s, j * n, True)
            total += sj * k
            by_e += ds * k
            by_n += sj * j * dn
            by_h += sj * dh
        gamma = scale * shape * total
        if not derive:
            return -2 * g * gamma, -gamma
        ratio_u, e_u, e_g = -ratio * p, (2 - 2 * ratio) * -ratio * p, (2 - 2 * ratio) * p
        shape_u, shape_g = 0.5 * (-ratio_u - (2 - ratio) * p) * p, -0.5 * p * p
        gamma_u = -12 * p * gamma + scale * (shape_u * total + shape * (by_e * e_u - 3 * n * p * by_n))
        gamma_g = scale * (shape_g * total + shape * by_e * e_g)
        gamma_h = scale * shape * by_h
        return (
            -2 * g * gamma, -2 * g * gamma_u, -2 * (gamma + g * gamma_g), -2 * g * gamma_h,
            -gamma, -gamma_u, -gamma_g, -gamma_h,
        )  # fmt: skip

    def coupled(self, y, derive):
        dy, r = self.flow(y)
        s = self.rock(y[H])
        kick = self.tide(y, s, derive)
        lift, pump = (kick[0], kick[4]) if derive else kick
        dy[0] += lift
        dy[RE] += pump * y[RE]
        dy[IM] += pump * y[IM]
        for k in range(N):
            dy[k] += self.push[k] * r["w"][k] ** 12
        g = 0.5 * (y[RE] * y[RE] + y[IM] * y[IM])
        longitude = self.motion[0] + self.rate_ref[0] + r["longitude"][0]
        heat = -(self.ref[0] * lift * longitude + pump * (2 * g * self.ref[0] * r["slope"][0] - r["radial"][0]))
        dy[H] = (heat + self.mass * self.radiogenic - self.area * (s["q"] + s["qm"])) / self.mass
        return dy, r, s, kick

    def derivs(self, t, y):
        try:
            return numpy.array(self.coupled(y.tolist(), False)[0])
        except (ArithmeticError, ValueError):
            return numpy.full(DIM, math.nan)  # outside the domain, as the program says it

    def jacobian(self, t, y):
        y = y.tolist()
        _, r, s, kick = self.coupled(y, True)
        lift, lift_u, lift_g, lift_h, pump, pump_u, pump_g, pump_h = kick
        jac = [[0.0] * DIM for _ in range(DIM)]

        def spread_offset(i, col, value):
            if i > 0:
                jac[ANGLE + i - 1][col] += value
                return
            for a in range(ANGLE, ANGLE + N - 2):
                jac[a][col] -= value
            for k in range(N):
                jac[RE + k][col] += value * y[IM + k]
                jac[IM + k][col] -= value * y[RE + k]

        def spread(k, col, value):
            if k < N - 1:
                spread_offset(k, col, -self.j[k] * value)
            if k > 0:
                spread_offset(k - 1, col, (self.j[k - 1] + 1) * value)

        for k in range(N):
            x, v, w, V, c = y[RE + k], y[IM + k], r["w"][k], r["v"][k], r["c"][k]
            rate_u, rate_g = -c * (4 * w * w + 6 * w * V + 4 * V * V), c * (3 * w * V + 4 * V * V)
            slope_u, slope_g = c * V * (3 * w + 4 * V), -4 * c * V * V
            lambda_u = -3 * self.motion[k] * w**4 + rate_u
            spread(k, k, lambda_u)
            spread(k, RE + k, rate_g * x)
            spread(k, IM + k, rate_g * v)
            turn = r["slope"][k] + r["offset"][0]
            jac[RE + k][k] += slope_u * v
            jac[IM + k][k] -= slope_u * x
            jac[RE + k][RE + k] += slope_g * x * v
            jac[RE + k][IM + k] += slope_g * v * v + turn
            jac[IM + k][RE + k] -= slope_g * x * x + turn
            jac[IM + k][IM + k] -= slope_g * v * x
            jac[k][k] -= 12 * w * self.push[k] * w**12
            if k == 0:
                self.interior_row(y, jac[H], r, s, kick, lambda_u, rate_g, slope_u, slope_g)
        for i, terms in enumerate(r["pairs"]):
            self.pair(y, jac, spread, i, terms)
        x, v = y[RE], y[IM]
        for row, f, own, by_u, by_g, by_h in (
            (0, 1.0, 0.0, lift_u, lift_g, lift_h),
            (RE, x, pump, pump_u, pump_g, pump_h),
            (IM, v, pump, pump_u, pump_g, pump_h),
        ):
            jac[row][0] += by_u * f
            jac[row][RE] += by_g * f * x
            jac[row][IM] += by_g * f * v
            jac[row][H] += by_h * f
            jac[row][row] += own
        return numpy.array(jac)

    def interior_row(self, y, row, r, s, kick, lambda_u, rate_g, slope_u, slope_g):
        """dh'/dy: the heat is what the innermost orbit loses."""
        lift, lift_u, lift_g, lift_h, pump, pump_u, pump_g, pump_h = kick
        p, _, _, _, rep, _, _, _, ui, uo = r["pairs"][0]
        x, v, ref, slope = y[RE], y[IM], self.ref[0], r["slope"][0]
        g, w = 0.5 * (x * x + v * v), r["w"][0]
        longitude = self.motion[0] + self.rate_ref[0] + r["longitude"][0]
        scale = -1 / self.mass
        by_lift, by_pump = scale * ref * longitude, scale * (2 * g * ref * slope - r["radial"][0])
        a, b = scale * ref * lift, scale * pump
        grad = by_lift * lift_g + by_pump * pump_g + a * rate_g + b * 2 * ref * (slope + g * slope_g)
        h = a * 0.5 * w / ref
        f = h - b
        row[0] += by_lift * lift_u + by_pump * pump_u + a * lambda_u + b * 2 * g * ref * slope_u
        row[0] -= h * rep * w + f * 0.5 * rep / ui
        row[1] -= f * 2 * rep / uo
        row[RE] += grad * x + f * p
        row[IM] += grad * v
        row[H] += by_lift * lift_h + by_pump * pump_h - self.area * (s["dq"] + s["dqm"]) / self.mass

    def pair(self, y, jac, spread, i, terms):
        p, q, cos, sin, rep, imp, req, imq, ui, uo = terms
        o, a = i + 1, ANGLE + i - 1
        xi, wi, xo, wo = RE + i, IM + i, RE + o, IM + o
        pc, ps, qc, qs = p * cos, p * sin, q * cos, q * sin
        for row, f in ((i, self.j[i] / self.ref[i]), (o, -(self.j[i] + 1) / self.ref[o])):
            jac[row][i] -= f * 0.5 * imp / ui
            jac[row][o] -= f * (2 * imp + 2.5 * imq) / uo
            jac[row][xi] += f * ps
            jac[row][wi] -= f * pc
            jac[row][xo] += f * qs
            jac[row][wo] -= f * qc
            if i > 0:
                jac[row][a] += f * (rep + req)
        p, q = p / self.ref[i], q / self.ref[o]
        jac[xi][i] += 0.5 * p * sin / ui
        jac[wi][i] -= 0.5 * p * cos / ui
        jac[xi][o] += 2 * p * sin / uo
        jac[wi][o] -= 2 * p * cos / uo
        jac[xo][o] += 2.5 * q * sin / uo
        jac[wo][o] -= 2.5 * q * cos / uo
        if i > 0:
            jac[xi][a] -= p * cos
            jac[wi][a] -= p * sin
            jac[xo][a] -= q * cos
            jac[wo][a] -= q * sin
        f, g = 1 / (self.ref[i] * ui), 1 / (self.ref[o] * uo)
        spread(i, i, -0.75 * f * rep / ui)
        spread(i, o, -f * rep / uo)
        spread(i, xi, 0.5 * f * pc)
        spread(i, wi, 0.5 * f * ps)
        spread(o, i, -g * rep / ui)
        spread(o, o, -g * (6 * rep + 8.75 * req) / uo)
        spread(o, xi, 2 * g * pc)
        spread(o, wi, 2 * g * ps)
        spread(o, xo, 2.5 * g * qc)
        spread(o, wo, 2.5 * g * qs)
        if i > 0:
            spread(i, a, -0.5 * f * imp)
            spread(o, a, -g * (2 * imp + 2.5 * imq))
