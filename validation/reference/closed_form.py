"""Reference values for the closed forms of the validation crate, written to closed_form.json.

Run:      python closed_form.py          (about a minute)
Needs:    mpmath==1.3.0 from PyPI (arbitrary-precision Bessel functions, elliptic integrals, quadrature);
          gmpy2, if installed, makes it faster
Writes:   a list of cases; each has the closed form's name, its arguments (exact binary doubles, SI units)
          and its values as decimal strings of `digits` trusted digits.
Method:   50 digits for formulas, 30 to 45 for series and roots, 16 or 18 where an infinite integral is evaluated.
Convention: peak phasors, e^{+j w t}. The formulas are those named beside each function. Where it is cheap to do so the
          formula is written in another way than in the Rust code (unscaled Bessel functions, Maxwell's first form of
          the mutual inductance, a contour rotation for the slowly decaying integral, ...).
"""

import json
import os

from mpmath import mp, mpc, mpf, pi, sqrt

mp.dps = 80
J = mpc(0, 1)
MU0 = 4 * pi * mpf(10) ** -7
STEFAN_BOLTZMANN = mpf("5.670374419e-8")
CASES = []


def emit(name, args, values, digits=50):
    """Appends one case; `values` maps a name to an mpmath number."""
    texts = {key: mp.nstr(mp.re(value), digits) for key, value in values.items()}
    CASES.append({"case": name, "digits": digits, "args": args, "values": texts})


def m(x):
    return mpf(x)


def skin_depth(rho, mu_r, f):
    return sqrt(m(rho) / (pi * m(f) * MU0 * m(mu_r)))


# ---------------------------------------------------------------- axial fields, wire, slab, sphere
def cylinder_axial(a, rho, mu_r, f, h0, r):
    """Solid cylinder in a uniform axial field; Bessel solution of the diffusion equation (e.g. W. R. Smythe)."""
    d = skin_depth(rho, mu_r, f)
    k = (1 - J) / d
    ka = k * m(a)
    j0, j1 = mp.besselj(0, ka), mp.besselj(1, ka)
    z = -m(rho) * k * j1 / j0
    factor = 2 * j1 / (ka * j0)
    density = m(h0) * k * mp.besselj(1, k * m(r)) / j0
    field = m(h0) * mp.besselj(0, k * m(r)) / j0
    emit("cylinder_axial", dict(radius=a, resistivity=rho, mu_r=mu_r, frequency=f, h0_peak=h0, r=r), dict(
        delta=d, power=pi * m(a) * z.real * m(h0) ** 2, resistance=z.real, reactance=z.imag, p=factor.real,
        q=-factor.imag, j_squared=abs(density) ** 2, h_re=field.real, h_im=field.imag))


def tube_axial(ri, ro, rho, mu_r, f, h0):
    """Tube in an axial field, J0 and Y0 with the flux of the bore as inner condition."""
    # J and Y are proportional to e^{-2 ro/delta} in a thick wall.
    mp.dps = 80 + int(2 * m(ro) / skin_depth(rho, mu_r, f))
    k = (1 - J) / skin_depth(rho, mu_r, f)
    ri, ro = m(ri), m(ro)
    bj = lambda n, r: mp.besselj(n, k * r)
    by = lambda n, r: mp.bessely(n, k * r)
    c = -J * 2 * pi * m(f) * MU0 * ri / 2
    matrix = mp.matrix([[bj(0, ro), by(0, ro)],
                        [m(rho) * k * bj(1, ri) - c * bj(0, ri), m(rho) * k * by(1, ri) - c * by(0, ri)]])
    a, b = mp.lu_solve(matrix, mp.matrix([m(h0), 0]))
    z = -m(rho) * k * (a * bj(1, ro) + b * by(1, ro)) / m(h0)
    bore = a * bj(0, ri) + b * by(0, ri)
    emit("tube_axial", dict(inner=float(ri), outer=float(ro), resistivity=rho, mu_r=mu_r, frequency=f, h0_peak=h0), dict(
        power=pi * ro * z.real * m(h0) ** 2, resistance=z.real, reactance=z.imag,
        bore_re=bore.real / m(h0), bore_im=bore.imag / m(h0)))
    mp.dps = 80


def slab(u):
    u = m(u)
    emit("slab_factor", dict(t_over_delta=float(u)),
         dict(factor=2 * (mp.sinh(u) - mp.sin(u)) / (mp.cosh(u) + mp.cos(u))))


def sphere(a, rho, mu_r, f, b0):
    """Sphere in a uniform field: modified Bessel function of order 3/2 matched to a dipole at r = a."""
    w, a = 2 * pi * m(f), m(a)
    kappa = sqrt(J * w * MU0 * m(mu_r) / m(rho))
    inner = lambda r: mp.besseli(mpf(3) / 2, kappa * r) / sqrt(r)
    d_inner = mp.diff(lambda r: r * inner(r), a) / a
    # C inner = (a + D/a^2) B0/2 ; (C/mu_r) d(r inner)/dr / r = (2 a - D/a^2) B0 / (2 a)
    matrix = mp.matrix([[inner(a), -1 / a**2 / 2], [d_inner / m(mu_r), 1 / a**3 / 2]])
    _, big_d = mp.lu_solve(matrix, mp.matrix([a / 2, mpf(1)]))
    moment = 2 * pi * big_d * m(b0) / MU0
    emit("sphere", dict(radius=float(a), resistivity=rho, mu_r=mu_r, frequency=f, b0_peak=b0), dict(
        power=-w * moment.imag * m(b0) / 2, moment_re=moment.real, moment_im=moment.imag), 40)


def round_wire(x):
    """Internal impedance of a round wire over its direct-current values; x = radius/delta."""
    z = (1 - J) * m(x)
    ratio = z / 2 * mp.besselj(0, z) / mp.besselj(1, z)
    emit("round_wire", dict(radius_over_delta=x), dict(resistance=ratio.real, inductance=ratio.imag / (m(x) ** 2 / 4)))


# ---------------------------------------------------------------- loops, rings, solenoids
def mutual(a, b, d):
    a, b = m(a), m(b)
    k2 = 4 * a * b / ((a + b) ** 2 + d**2)
    k = sqrt(k2)
    return MU0 * sqrt(a * b) * ((2 / k - k) * mp.ellipk(k2) - 2 / k * mp.ellipe(k2))


def loops(a, b, d):
    emit("coaxial_loops", dict(a=a, b=b, distance=d), dict(
        mutual=mutual(a, b, m(d)), slope=mp.diff(lambda x: mutual(a, b, x), m(d))), 30)


def ring(radius, wire):
    uniform = MU0 * m(radius) * (mp.log(8 * m(radius) / m(wire)) - mpf(7) / 4)
    skin = MU0 * m(radius) * (mp.log(8 * m(radius) / m(wire)) - 2)
    emit("ring", dict(radius=radius, wire_radius=wire), dict(uniform=uniform, skin=skin))


def nagaoka_value(u):
    k2 = u**2 / (1 + u**2)
    k, kp2 = sqrt(k2), 1 - k2
    bracket = kp2 / k2 * (mp.ellipk(k2) - mp.ellipe(k2)) + mp.ellipe(k2) - k
    return 4 / (3 * pi * sqrt(kp2)) * bracket


def nagaoka(u):
    emit("nagaoka", dict(diameter_over_length=u), dict(factor=nagaoka_value(m(u))))


def solenoid(n, a, length):
    value = MU0 * m(n) ** 2 * pi * m(a) ** 2 / m(length) * nagaoka_value(2 * m(a) / m(length))
    emit("solenoid", dict(turns=n, radius=a, length=length), dict(inductance=value))


def sheet_field(ni, a, length, z):
    term = lambda s: s / sqrt(m(a) ** 2 + s**2)
    value = MU0 * m(ni) / 2 * (term(m(z) + m(length) / 2) - term(m(z) - m(length) / 2))
    emit("sheet_axis_field", dict(current_per_length=ni, radius=a, length=length, z=z), dict(b=value))


# ---------------------------------------------------------------- Dodd and Deeds, J. Appl. Phys. 39 (1968) 2829
def struve_k(nu, x):
    """H_nu(x) - Y_nu(x) for |x| >= 90 (DLMF 11.6.1): the smallest term is below 1e-38."""
    term = (2 / x if nu == 0 else mpf(2)) / pi
    total, k = mpf(0), 0
    while k < 45 and abs(term) > mpf(10) ** -45 * abs(total):
        total += term
        odd = 2 * k + 1
        term *= -(mpf(odd) / x) ** 2 if nu == 0 else -mpf(odd) * (odd - 2) / x**2
        k += 1
    return total


def hankel(kind, nu, z):
    """H_nu^(1) (kind +1) or H_nu^(2) (kind -1) for |z| >= 90, DLMF 10.17.5: the smallest term is below 1e-78."""
    total, term, k = mpf(0), mpf(1), 0
    while abs(term) > mpf(10) ** -45:
        total += term
        k += 1
        term *= kind * J * (4 * nu * nu - (2 * k - 1) ** 2) / (8 * k * z)
    return sqrt(2 / (pi * z)) * mp.exp(kind * J * (z - nu * pi / 2 - pi / 4)) * total


def moment(x):
    """int_0^x t J1(t) dt."""
    if x < 90:
        return x**3 / 6 * mp.hyp1f2(mpf(3) / 2, mpf(5) / 2, 2, -(x**2) / 4)
    return 1 + pi * x / 2 * (hankel(1, 1, x) * struve_k(0, x) - hankel(1, 0, x) * struve_k(1, x)).real


def coil_k(alpha, r1, r2):
    return (moment(alpha * r2) - moment(alpha * r1)) / alpha**2


def panels(f, top, n):
    """Gauss-Legendre panels on [0, top], the first one divided geometrically."""
    edges = [mpf(0)] + [top / n * mpf(2) ** -i for i in range(12, 0, -1)] + [top * i / n for i in range(1, n + 1)]
    return mp.quad(f, edges, method="gauss-legendre", maxdegree=4)


def coil_air(r1, r2, length, turns):
    """Self-inductance: panels up to A, and beyond A the Hankel parts on rotated contours."""
    mp.dps = 30
    r1, r2, length = m(r1), m(r2), m(length)
    big_a = 95 / r1
    window = lambda al: 2 / al * (length + mp.expm1(-al * length) / al)
    head = panels(lambda al: coil_k(al, r1, r2) ** 2 * window(al), big_a, int(big_a * r2 / 4) + 1)

    def part(kind, x):
        return pi * x / 2 * (hankel(kind, 1, x) * struve_k(0, x) - hankel(kind, 0, x) * struve_k(1, x))

    weight = lambda al: window(al) / al**4
    u = lambda al: part(1, al * r2) - part(1, al * r1)
    steps = [0, 4, 8, 16, 24, 36, 50, 66]
    rays = lambda f, c: J * mp.quad(lambda t: f(big_a + J * t), [x / c for x in steps], method="gauss-legendre", maxdegree=4)
    square = rays(lambda al: u(al) ** 2 * weight(al), 2 * r1)
    cross = rays(lambda al: part(1, al * r2) * part(-1, al * r1) * weight(al), r2 - r1)
    steady = lambda al: (part(1, al * r2) * part(-1, al * r2) + part(1, al * r1) * part(-1, al * r1)).real * weight(al)
    # x = A/s maps the tail to (0, 1]
    smooth = mp.quad(lambda s: steady(big_a / s) * big_a / s**2, [0, mpf("0.25"), mpf("0.5"), 1],
                     method="gauss-legendre", maxdegree=4)
    tail = square.real / 2 + smooth / 2 - cross.real
    value = pi * MU0 * m(turns) ** 2 / ((r2 - r1) ** 2 * length**2) * (head + tail)
    emit("coil_air", dict(r1=float(r1), r2=float(r2), length=float(length), turns=turns), dict(inductance=value), 18)
    mp.dps = 80


def reflection(alpha, rho, mu_r, f, thickness):
    mu_r = m(mu_r)
    alpha1 = sqrt(alpha**2 + J * 2 * pi * m(f) * MU0 * mu_r / m(rho))
    if thickness is None:
        return (mu_r * alpha - alpha1) / (mu_r * alpha + alpha1)
    decay = mp.exp(-2 * alpha1 * m(thickness))
    top = (mu_r**2 * alpha**2 - alpha1**2) * (1 - decay)
    return top / ((mu_r * alpha + alpha1) ** 2 - (mu_r * alpha - alpha1) ** 2 * decay)


def coil_over(r1, r2, length, lift, turns, rho, mu_r, f, thickness):
    mp.dps = 30
    args = dict(r1=r1, r2=r2, length=length, lift_off=lift, turns=turns, resistivity=rho, mu_r=mu_r, frequency=f)
    if thickness is not None:
        args["thickness"] = thickness
    r1, r2, length, lift = m(r1), m(r2), m(length), m(lift)
    top = 40 / lift
    integrand = lambda al: (coil_k(al, r1, r2) / al) ** 2 * mp.exp(-2 * al * lift) * mp.expm1(-al * length) ** 2 * \
        reflection(al, rho, mu_r, f, thickness)
    total = panels(integrand, top, int(top * r2 / 4) + 1)
    z = J * 2 * pi * m(f) * pi * MU0 * m(turns) ** 2 / ((r2 - r1) ** 2 * length**2) * total
    emit("coil_half_space" if thickness is None else "coil_plate", args, dict(re=z.real, im=z.imag), 18)
    mp.dps = 80


def loop_over(a, lift, rho, mu_r, f):
    mp.dps = 30
    top = 40 / m(lift)
    integrand = lambda al: mp.besselj(1, al * m(a)) ** 2 * mp.exp(-2 * al * m(lift)) * reflection(al, rho, mu_r, f, None)
    z = J * 2 * pi * m(f) * pi * MU0 * m(a) ** 2 * panels(integrand, top, int(top * m(a) / 4) + 1)
    emit("loop_half_space", dict(radius=a, lift_off=lift, resistivity=rho, mu_r=mu_r, frequency=f),
         dict(re=z.real, im=z.imag), 18)
    mp.dps = 80


COSHES = [mp.cosh(mpf(i) / 16) for i in range(1100)]


def k_functions(x):
    """K0(x), K1(x) and int_x^inf t K1(t) dt for real x, by the trapezoidal rule on DLMF 10.32.9 (error below 1e-28 for x up to 60).

    K_n = int_0^inf e^{-x cosh t} cosh(nt) dt, and the moment x K0 + int_x^inf K0 has the weight x + 1/cosh t.
    """
    k0 = k1 = moment_k1 = mpf(0)
    for i, c in enumerate(COSHES):
        weight = mp.exp(-x * c) / (32 if i == 0 else 16)
        k0 += weight
        k1 += weight * c
        moment_k1 += weight * (x + 1 / c)
        if x * (c - 1) > 75:
            break
    return k0, k1, moment_k1


def coil_rod(r1, r2, length, turns, b, rho, mu_r, f):
    mp.dps = 30
    args = dict(r1=r1, r2=r2, length=length, turns=turns, rod_radius=b, resistivity=rho, mu_r=mu_r, frequency=f)
    r1, r2, length, b, mu_r = m(r1), m(r2), m(length), m(b), m(mu_r)
    w = 2 * pi * m(f)

    def rod_factor(al):
        al1 = sqrt(al**2 + J * w * MU0 * mu_r / m(rho))
        i = mp.besseli
        top = mu_r * al * i(0, al * b) * i(1, al1 * b) - al1 * i(1, al * b) * i(0, al1 * b)
        k0, k1, _ = k_functions(al * b)
        low = mu_r * al * k0 * i(1, al1 * b) + al1 * k1 * i(0, al1 * b)
        return top / low

    def winding(al):
        return (k_functions(al * r1)[2] - k_functions(al * r2)[2]) / al**2

    integrand = lambda al: rod_factor(al) * winding(al) ** 2 * 2 * (1 - mp.cos(al * length)) / al**2
    top = 22 / (r1 - b)
    n = int(top * length / 8) + 1
    edges = [top / n * mpf(2) ** -i for i in range(34, 0, -2)] + [top * i / n for i in range(1, n + 1)]
    total = mp.quad(integrand, edges, method="gauss-legendre", maxdegree=4)
    z = J * w * 2 * MU0 * (m(turns) / ((r2 - r1) * length)) ** 2 * total
    emit("coil_rod", args, dict(re=z.real, im=z.imag), 16)
    mp.dps = 80


# ---------------------------------------------------------------- heat
def constant_flux(fo, x):
    """Carslaw and Jaeger, Conduction of Heat in Solids, section 7.8."""
    total, n = mpf(0), 1
    while True:
        beta = mp.besseljzero(1, n)
        factor = mp.exp(-(beta**2) * m(fo))
        if factor < mpf(10) ** -52:
            break
        total += factor * mp.besselj(0, beta * m(x)) / (beta**2 * mp.besselj(0, beta))
        n += 1
    emit("cylinder_constant_flux", dict(fo=fo, r_over_radius=x),
         dict(theta=2 * m(fo) + m(x) ** 2 / 2 - mpf(1) / 4 - 2 * total), 45)


def convection(bi, fo, x):
    """Series with the roots of zeta J1 - Bi J0."""
    total, n = mpf(0), 1
    while True:
        low = mp.besseljzero(1, n - 1) if n > 1 else mpf(0)
        high = mp.besseljzero(0, n)
        f = lambda z: z * mp.besselj(1, z) - m(bi) * mp.besselj(0, z)
        zeta = mp.findroot(f, (low, high), solver="anderson", tol=mpf(10) ** -130)
        j0, j1 = mp.besselj(0, zeta), mp.besselj(1, zeta)
        amplitude = 2 / zeta * j1 / (j0**2 + j1**2)
        if n == 1:
            first = (zeta, amplitude)
        factor = mp.exp(-(zeta**2) * m(fo))
        total += amplitude * factor * mp.besselj(0, zeta * m(x))
        if factor < mpf(10) ** -48:
            break
        n += 1
    emit("cylinder_convection", dict(bi=bi, fo=fo, r_over_radius=x),
         dict(theta=total, zeta1=first[0], c1=first[1]), 40)


def radiation(heat_capacity, emissivity, area, ti, t, ts):
    rate = m(emissivity) * STEFAN_BOLTZMANN * m(area) / m(heat_capacity)
    ti, t, ts = m(ti), m(t), m(ts)
    if ts == 0:
        value = (t**-3 - ti**-3) / (3 * rate)
    else:
        part = lambda x: mp.log(abs((ts + x) / (ts - x))) + 2 * mp.atan(x / ts)
        value = (part(t) - part(ti)) / (4 * ts**3 * rate)
    emit("radiation_time", dict(heat_capacity=heat_capacity, emissivity=emissivity, area=area, start=float(ti),
                                end=float(t), surroundings=float(ts)), dict(time=value), 40)


def stefan(number):
    f = lambda x: sqrt(pi) * x * mp.exp(x * x) * mp.erf(x) - m(number)
    low, high = mpf(0), sqrt(m(number) / 2)
    for _ in range(260):
        middle = (low + high) / 2
        low, high = (middle, high) if f(middle) < 0 else (low, middle)
    emit("stefan_lambda", dict(stefan=number), {"lambda": low})


def half_space_flux(q, k, diffusivity, depth, t):
    s = sqrt(m(diffusivity) * m(t))
    x = m(depth) / (2 * s)
    ierfc = mp.exp(-x * x) / sqrt(pi) - x * mp.erfc(x)
    emit("half_space_flux", dict(flux=q, conductivity=k, diffusivity=diffusivity, depth=depth, time=t),
         dict(rise=2 * m(q) * s / m(k) * ierfc), 40)


def core_surface(x):
    """Phi(R/delta) = 1 - 2 int g r ln(R/r) dr / int g r dr with g = |J1(kr)|^2, by quadrature."""
    k = (1 - J) * m(x)
    if x <= 20:
        g = lambda s: abs(mp.besselj(1, k * s)) ** 2 * s
        edges = [0, mpf("0.25"), mpf("0.5"), mpf("0.75"), mpf("0.9"), 1]
        phi = 1 + 2 * mp.quad(lambda s: g(s) * mp.log(s), edges) / mp.quad(g, edges)
    else:
        # Poynting balance: int g r ln(R/r) dr = (rho/4)(|H(R)|^2 - |H(0)|^2)
        j0 = mp.besselj(0, k)
        phi = 1 - (1 - 1 / abs(j0) ** 2) / (-k * mp.besselj(1, k) / j0).real
    emit("core_surface_factor", dict(radius_over_delta=x), dict(phi=phi), 30)


def efficiency(ratio, rho_c, rho_w, mu_r):
    emit("long_coil_efficiency", dict(coil_over_work=ratio, coil_resistivity=rho_c, work_resistivity=rho_w, mu_r=mu_r),
         dict(efficiency=1 / (1 + m(ratio) * sqrt(m(rho_c) / (m(mu_r) * m(rho_w))))))


def main():
    for row in [(0.025, 2.65e-8, 1.0, 50.0, 1e5), (0.0375, 3.0e-8, 1.0, 50.0, 8e4), (0.02, 1.15e-6, 1.0, 1e3, 1e5),
                (0.02, 1.15e-6, 1.0, 1e4, 1e5), (0.01, 1.7e-7, 100.0, 1e4, 3e4), (0.01, 7.2e-7, 1.0, 1e5, 2e4),
                (0.015, 2.0e-7, 40.0, 500.0, 5e4)]:
        cylinder_axial(*row, 0.75 * row[0])
        cylinder_axial(*row, row[0])
    for x in [0.05, 0.1, 0.25, 0.5, 0.75, 1.0, 1.25, 1.5, 1.75, 2.0, 2.5, 3.0, 4.0, 5.0, 7.5, 10.0, 15.0, 25.0, 100.0, 300.0]:
        d = float(skin_depth(1e-6, 1.0, 1e3))
        cylinder_axial(x * d, 1e-6, 1.0, 1e3, 1e3, 0.5 * x * d)
    for ri, ro, rho, mu_r, f in [(0.02, 0.025, 1.2e-6, 1.0, 1e3), (0.02, 0.0202, 1.7e-8, 1.0, 1e3),
                                 (0.005, 0.03, 2e-7, 50.0, 5e3), (0.001, 0.03, 3e-8, 1.0, 50.0),
                                 (0.05, 0.06, 2e-7, 50.0, 1e4)]:
        tube_axial(ri, ro, rho, mu_r, f, 1e4)
    for u in [0.01, 0.1, 0.49, 0.51, 1.0, 2.2541725, 3.141592653589793, 6.0, 30.0, 900.0]:
        slab(u)
    for a, rho, mu_r, f in [(0.03, 2e-7, 1.0, 1.0), (0.03, 2e-7, 1.0, 200.0), (0.03, 2e-7, 1.0, 1e5),
                            (0.03, 2e-7, 50.0, 50.0), (0.03, 2e-7, 50.0, 1e4), (0.01, 1e-6, 200.0, 10.0)]:
        sphere(a, rho, mu_r, f, 0.1)
    for x in [0.05, 0.25, 0.5, 1.0, 2.0, 2.14, 3.0, 5.0, 8.0, 20.0, 70.0, 300.0]:
        round_wire(x)
    for a, b, d in [(0.05, 0.05, 0.01), (0.05, 0.05, 1e-4), (0.05, 0.03, 0.0), (0.05, 0.03, 0.02), (0.05, 0.01, 5.0),
                    (0.05, 0.05, -0.1), (0.1, 0.001, 0.05)]:
        loops(a, b, d)
    for radius, wire in [(0.05, 0.005), (0.05, 0.001), (0.1, 0.004)]:
        ring(radius, wire)
    for u in [0.001, 0.05, 0.1, 0.2, 0.25, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 1.0, 1.25, 1.5, 2.0, 2.5, 3.0, 4.0, 5.0, 6.0, 8.0,
              10.0, 15.0, 20.0, 50.0, 100.0]:
        nagaoka(u)
    for row in [(10.0, 0.033, 0.1), (5.0, 0.05, 0.1), (20.0, 0.02, 0.2), (6.0, 0.04, 0.05)]:
        solenoid(*row)
    for z in [0.0, 0.025, 0.05, 0.06]:
        sheet_field(1e5, 0.033, 0.1, z)
    coil_air(0.02, 0.03, 0.02, 100.0)
    coil_air(0.05, 0.052, 0.1, 40.0)
    coil_air(0.01, 0.04, 0.004, 25.0)
    coil_over(0.02, 0.03, 0.01, 0.004, 50.0, 2e-7, 1.0, 1e4, None)
    coil_over(0.02, 0.03, 0.01, 0.004, 50.0, 2e-7, 40.0, 5e3, None)
    coil_over(0.02, 0.03, 0.01, 0.004, 50.0, 2.8e-8, 1.0, 1e3, 0.002)
    coil_over(0.02, 0.03, 0.01, 0.004, 50.0, 2e-7, 40.0, 50.0, 0.005)
    loop_over(0.03, 0.005, 2e-7, 1.0, 1e4)
    loop_over(0.03, 0.005, 2e-7, 40.0, 1e3)
    coil_rod(0.03, 0.034, 0.03, 12.0, 0.018, 1.2e-6, 1.0, 2e3)
    coil_rod(0.03, 0.034, 0.03, 12.0, 0.018, 2e-7, 50.0, 1e3)
    for fo in [0.01, 0.02, 0.05, 0.1, 0.15, 0.2, 0.3, 0.5, 1.0]:
        constant_flux(fo, 0.0)
        constant_flux(fo, 1.0)
    constant_flux(0.05, 0.5)
    for bi, fo, x in [(0.01, 0.3, 0.0), (0.1, 0.3, 1.0), (0.5, 0.3, 0.5), (1.0, 0.2, 0.0), (2.0, 0.05, 1.0), (5.0, 0.02, 0.9),
                      (10.0, 0.1, 0.0), (100.0, 0.1, 0.5)]:
        convection(bi, fo, x)
    for row in [(5000.0, 0.8, 0.05, 1500.0, 600.0, 300.0), (5000.0, 0.8, 0.05, 300.0, 1200.0, 1500.0),
                (5000.0, 0.8, 0.05, 1500.0, 310.0, 300.0), (5000.0, 0.8, 0.05, 1500.0, 600.0, 0.0),
                (5000.0, 0.8, 0.05, 1500.0, 1400.0, 4.0)]:
        radiation(*row)
    for number in [0.005, 0.05, 0.1, 0.2, 0.5, 1.0, 2.0, 5.0, 50.0]:
        stefan(number)
    for depth, t in [(0.0, 2.0), (0.001, 2.0), (0.01, 2.0)]:
        half_space_flux(1e7, 30.0, 6e-6, depth, t)
    for x in [0.05, 0.5, 1.0, 3.0, 10.0, 20.0, 100.0, 300.0]:
        core_surface(x)
    for row in [(1.1, 2.0e-8, 2e-7, 50.0), (1.5, 2.0e-8, 1.22e-6, 1.0), (2.0, 2.0e-8, 1.7e-8, 1.0)]:
        efficiency(*row)
    path = os.path.join(os.path.dirname(os.path.abspath(__file__)), "closed_form.json")
    document = {"generator": "closed_form.py", "library": "mpmath 1.3.0", "cases": CASES}
    with open(path, "w", encoding="utf-8") as file:
        json.dump(document, file, indent=1)
        file.write("\n")


if __name__ == "__main__":
    main()
