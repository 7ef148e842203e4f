"""Truth for motion on a conic: classical closed forms of Kepler's problem in 80-digit arithmetic (mpmath).

Not the universal form that the crate uses: an ellipse by the eccentric anomaly, a parabola by Barker's
equation in closed form (Cardano), a hyperbola by its hyperbolic anomaly, repulsion by the other branch of
the hyperbola, no force by the straight line. Every input is the double that its decimal text means, turned
into an exact 80-digit number; k = 0.01720209895 is the exact decimal. Beside each result stands its
conditioning: how far it moves when each input moves by half a unit in its last place, which no
double-precision code can promise to undercut.
"""

import math
import os
import random

from mpmath import mp, mpf

import table

mp.dps = 80
K = mpf("0.01720209895")
MU = K * K
DIGITS = 22


def text(x):
    return mp.nstr(x, DIGITS, strip_zeros=True, min_fixed=-4, max_fixed=6)


def half_ulp(x):
    return mpf(math.ulp(x)) / 2


# --- Kepler's equations -------------------------------------------------------------------------------

def newton(residual_and_slope, low, high, start):
    """The root of an increasing function between `low` and `high`, to 58 digits; steps that leave the bracket are halved."""
    x = start
    for _ in range(400):
        value, slope = residual_and_slope(x)
        if value == 0:
            return x
        if value > 0:
            high = x
        else:
            low = x
        step = x - value / slope
        if not low < step < high:
            step = (low + high) / 2
        if abs(step - x) <= abs(x) * mpf(10) ** (-58):
            return step
        x = step
    raise ArithmeticError("no convergence")


def eccentric_anomaly(e, mean):
    turns = mp.nint(mean / (2 * mp.pi))
    m = mean - 2 * mp.pi * turns
    if m < 0:
        return -eccentric_anomaly(e, -m) + 2 * mp.pi * turns
    if m == 0:
        return 2 * mp.pi * turns
    start = min(mp.pi, m / (1 - e), mp.cbrt(6 * m / e) if e > 0 else m)
    f = lambda x: (x - e * mp.sin(x) - m, 1 - e * mp.cos(x))
    return newton(f, mpf(0), mp.pi + mpf(10) ** -30, start) + 2 * mp.pi * turns


def hyperbolic_anomaly(e, mean):
    if mean < 0:
        return -hyperbolic_anomaly(e, -mean)
    if mean == 0:
        return mpf(0)
    start = min(mp.asinh(mean / (e - 1)), mp.cbrt(6 * mean / e))
    f = lambda x: (e * mp.sinh(x) - x - mean, e * mp.cosh(x) - 1)
    high = mp.asinh(mean / (e - 1)) + 1
    return newton(f, mpf(0), high, start)


def repulsive_anomaly(e, mean):
    if mean < 0:
        return -repulsive_anomaly(e, -mean)
    if mean == 0:
        return mpf(0)
    f = lambda x: (e * mp.sinh(x) + x - mean, e * mp.cosh(x) + 1)
    high = mp.asinh(mean / e) + mpf(10) ** -30
    return newton(f, mpf(0), high, high / 2)


def perifocal(mu, q, e, dt):
    """Place and velocity (x toward perihelion) `dt` after perihelion, attraction `mu` > 0."""
    if e == 1:
        p = 2 * q
        b = 3 * mp.sqrt(mu / p**3) * dt
        # Barker: tan^3 + 3 tan = 2 b, b the mean motion of the parabola times the time.
        y = mp.sqrt(1 + b * b)
        half = mp.cbrt(y + abs(b))
        t = mp.sign(b) * (half - 1 / half)
        x, yy = q * (1 - t * t), 2 * q * t
        r = q * (1 + t * t)
        rate = mp.sqrt(mu * p) / (r * r)          # true anomaly
        dt_dnu = (1 + t * t) / 2
        return x, yy, -2 * q * t * dt_dnu * rate, 2 * q * dt_dnu * rate
    if e < 1:
        a = q / (1 - e)
        n = mp.sqrt(mu / a**3)
        E = eccentric_anomaly(e, n * dt)
        b = a * mp.sqrt(1 - e * e)
        rate = n / (1 - e * mp.cos(E))
        # 1 - cos E written so that it keeps its digits near perihelion.
        x = q - 2 * a * mp.sin(E / 2) ** 2
        return x, b * mp.sin(E), -a * mp.sin(E) * rate, b * mp.cos(E) * rate
    a = q / (e - 1)
    n = mp.sqrt(mu / a**3)
    H = hyperbolic_anomaly(e, n * dt)
    b = a * mp.sqrt(e * e - 1)
    rate = n / (e * mp.cosh(H) - 1)
    x = q - 2 * a * mp.sinh(H / 2) ** 2
    return x, b * mp.sinh(H), -a * mp.sinh(H) * rate, b * mp.cosh(H) * rate


# --- from a state ----------------------------------------------------------------------------------------

def dot(a, b):
    return sum(x * y for x, y in zip(a, b))


def cross(a, b):
    return [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]]


def norm(a):
    return mp.sqrt(dot(a, a))


def propagate(mu, r0, v0, dt):
    """The state `dt` later under the acceleration -mu r / r^3, any sign of mu, by the classical elements."""
    if mu == 0:
        return [x + v * dt for x, v in zip(r0, v0)], list(v0)
    h = cross(r0, v0)
    radius, speed2, rv = norm(r0), dot(v0, v0), dot(r0, v0)
    evec = [(speed2 / mu - 1 / radius) * x - rv / mu * v for x, v in zip(r0, v0)]
    e = norm(evec)
    # For repulsion the eccentricity vector points away from perihelion.
    side = 1 if mu > 0 else -1
    P = [side * x / e for x in evec]
    Q = cross([x / norm(h) for x in h], P)
    inverse_a = 2 / radius - speed2 / mu
    if mu > 0:
        q = dot(h, h) / mu / (1 + e)
        if inverse_a == 0:
            t = dot(r0, Q) / (radius + dot(r0, P))
            p = 2 * q
            since = mp.sqrt(p**3 / mu) / 2 * (t + t**3 / 3)
        elif inverse_a > 0:
            a = 1 / inverse_a
            sinE, cosE = rv / mp.sqrt(mu * a) / e, (1 - radius / a) / e
            E = mp.atan2(sinE, cosE)
            since = (E - e * mp.sin(E)) * mp.sqrt(a**3 / mu)
        else:
            a = -1 / inverse_a
            H = mp.asinh(rv / mp.sqrt(mu * a) / e)
            since = (e * mp.sinh(H) - H) * mp.sqrt(a**3 / mu)
        x, y, vx, vy = perifocal(mu, q, e if inverse_a != 0 else mpf(1), since + dt)
    else:
        m = -mu
        a = 1 / inverse_a if inverse_a > 0 else -1 / inverse_a
        H = mp.asinh(rv / mp.sqrt(m * a) / e)
        since = (e * mp.sinh(H) + H) * mp.sqrt(a**3 / m)
        n = mp.sqrt(m / a**3)
        H = repulsive_anomaly(e, n * (since + dt))
        b = a * mp.sqrt(e * e - 1)
        rate = n / (e * mp.cosh(H) + 1)
        x, y = a * (mp.cosh(H) + e), b * mp.sinh(H)
        vx, vy = a * mp.sinh(H) * rate, b * mp.cosh(H) * rate
    place = [x * p + y * s for p, s in zip(P, Q)]
    velocity = [vx * p + vy * s for p, s in zip(P, Q)]
    return place, velocity


def relative_change(a, b):
    return norm([x - y for x, y in zip(a, b)]) / norm(b)


# --- tables -------------------------------------------------------------------------------------------------

def perihelion_inputs():
    es = [0.0, 0.1, 0.5, 0.9, 0.99, 1 - 1e-4, 1 - 1e-8, 1 - 1e-12, 1.0, 1 + 1e-12, 1 + 1e-8, 1 + 1e-4, 1.05731,
          1.5, 3.0, 6.0, 10.0]
    qs = [0.005, 0.1, 1.0, 5.0, 30.0]
    dts = [0.001, 1.0, 100.0, 2000.0, 40000.0]
    sign = 1
    for e in es:
        for q in qs:
            for dt in dts:
                sign = -sign
                yield q, e, sign * dt
    chance = random.Random(20310304)
    for _ in range(80):
        q = math.exp(chance.uniform(math.log(0.005), math.log(30)))
        e = chance.choice([chance.uniform(0, 1), 1 + chance.choice([-1, 1]) * 10 ** chance.uniform(-13, -2), chance.uniform(1, 10)])
        dt = chance.choice([-1, 1]) * 10 ** chance.uniform(-3, math.log10(40000))
        yield q, e, dt


def make_perihelion(folder):
    rows = []
    for q, e, dt in perihelion_inputs():
        exact = [mpf(q), mpf(e), mpf(dt), MU]
        solve = lambda x: perifocal(x[3], x[0], x[1], x[2])
        x, y, vx, vy = solve(exact)
        nu = mp.atan2(y, x)
        moved = [mpf(0)] * 3
        for at, step in enumerate([half_ulp(q), half_ulp(e) if e else mpf(0), half_ulp(dt), half_ulp(float(MU))]):
            if step == 0 or (e == 1 and at == 1):
                # The step of e at exactly 1 goes to the hyperbola's side; the closed form allows it.
                step = half_ulp(1.0) if e == 1 else step
            near = list(exact)
            near[at] += step
            if near[at] == exact[at]:
                continue
            a, b, c, d = solve(near)
            moved[0] += relative_change([a, b], [x, y])
            moved[1] += relative_change([c, d], [vx, vy])
            turn = mp.atan2(b, a) - nu
            moved[2] += abs(turn - 2 * mp.pi * mp.nint(turn / (2 * mp.pi)))
        rows.append([q, e, dt] + [text(v) for v in (x, y, vx, vy, nu, mp.hypot(x, y))] + [mp.nstr(v, 3) for v in moved])
    table.write(
        os.path.join(folder, "conic_perihelion.csv"),
        [
            "Motion from perihelion: classical closed forms (ellipse, Barker's parabola, hyperbola) in 80-digit arithmetic.",
            "Source: " + table.versions("mpmath") + ", make_conic.py.",
            "Inputs are the doubles that the decimals mean; GM is the square of the exact decimal 0.01720209895, au^3/d^2.",
            "Units: q au; time since perihelion dt in days; x (to perihelion), y, radius au; vx, vy au/day; true anomaly rad, (-pi, pi].",
            "place_conditioning, velocity_conditioning (relative) and anomaly_conditioning (rad): sum of the changes of the result when",
            "q, e, dt and GM (which no double holds exactly) each move by half a unit in the last place.",
            "Tolerance of a comparison: 1e-12 relative, or ten times the conditioning where that is worse: no double-precision code can",
            "know its inputs better than half a unit in the last place, and ten roundings of that size are fair for a whole solution.",
            "Tolerance of the regeneration: 1e-15 relative (the arithmetic carries 80 digits; 22 are written).",
        ],
        ["q_au", "e", "dt_days", "x_au", "y_au", "vx_au_d", "vy_au_d", "true_anomaly_rad", "radius_au", "place_conditioning",
         "velocity_conditioning", "anomaly_conditioning"],
        rows,
    )


def state_inputs():
    k = 0.01720209895
    circle = ((1.0, 0.0, 0.0), (0.0, k, 0.0))
    for beta in [0.0, 0.1, 0.5, 0.9, 1.0, 1.5, 2.5]:
        yield circle[0], circle[1], beta, 50.0
    sheet = ((0.8, 0.6, 0.1), (-0.012, 0.014, 0.003))
    yield *sheet, 1.8, 80.0
    yield *sheet, 1.8, -80.0
    yield *sheet, 0.3, 200.0
    for beta in [0.0, 0.3, 0.999999, 1.0, 1.000001, 1.8, 2.5]:
        for dt in [-2000.0, -1.5, 400.0, 2000.0]:
            yield *sheet, beta, dt
    chance = random.Random(18820917)
    for beta in [0.0, 0.0, 1e-4, 1e-3, 0.01, 0.05, 0.1, 0.2, 0.4, 0.6, 0.8, 0.95, 0.99, 1 - 1e-9, 1 + 1e-9, 1.01, 1.1, 1.3, 1.7, 2.0, 2.5, 0.0, 0.02, 0.3]:
        radius = math.exp(chance.uniform(math.log(0.03), math.log(12)))
        direction = [chance.gauss(0, 1) for _ in range(3)]
        size = math.sqrt(sum(x * x for x in direction))
        r0 = tuple(radius * x / size for x in direction)
        speed = k * math.sqrt(2 / radius) * chance.uniform(0.7, 1.15)
        heading = [chance.gauss(0, 1) for _ in range(3)]
        size = math.sqrt(sum(x * x for x in heading))
        v0 = tuple(speed * x / size for x in heading)
        yield r0, v0, beta, chance.choice([-1, 1]) * 10 ** chance.uniform(-1, math.log10(2000))


def derivative(mu, r0, v0, dt):
    """d(r, v) / d(v0), 6 x 3, by central differences with a step of 1e-24: error about 1e-40 relative."""
    step = mpf(10) ** -24
    columns = []
    for axis in range(3):
        ends = []
        for sign in (1, -1):
            v = list(v0)
            v[axis] += sign * step
            r, w = propagate(mu, r0, v, dt)
            ends.append(list(r) + list(w))
        columns.append([(a - b) / (2 * step) for a, b in zip(*ends)])
    return [[columns[c][i] for c in range(3)] for i in range(6)]


def frobenius(m):
    return mp.sqrt(sum(x * x for row in m for x in row))


def make_state(folder):
    rows = []
    for r0, v0, beta, dt in state_inputs():
        values = list(r0) + list(v0) + [beta, dt]
        exact = [mpf(x) for x in values] + [MU]
        split = lambda x: (x[8] * (1 - x[6]), x[0:3], x[3:6], x[7])
        place, velocity = propagate(*split(exact))
        d = derivative(*split(exact))
        moved = [mpf(0)] * 4
        for at in range(9):
            base = values[at] if at < 8 else float(MU)
            if base == 0.0:
                continue
            near = list(exact)
            near[at] += half_ulp(base)
            p, w = propagate(*split(near))
            moved[0] += relative_change(p, place)
            moved[1] += relative_change(w, velocity)
            g = derivative(*split(near))
            for part, rows_of in ((2, slice(0, 3)), (3, slice(3, 6))):
                moved[part] += frobenius([[a - b for a, b in zip(x, y)] for x, y in zip(g[rows_of], d[rows_of])]) / frobenius(d[rows_of])
        rows.append(values + [text(x) for x in place + velocity] + [text(x) for row in d for x in row] + [mp.nstr(x, 3) for x in moved])
    cross_check()
    axes = "xyz"
    columns = [f"{a}0_au" for a in axes] + [f"v{a}0_au_d" for a in axes] + ["beta", "dt_days"]
    columns += [f"{a}_au" for a in axes] + [f"v{a}_au_d" for a in axes]
    columns += [f"d{out}_dv{a}0" for out in ["x", "y", "z", "vx", "vy", "vz"] for a in axes]
    columns += ["place_conditioning", "velocity_conditioning", "place_derivative_conditioning", "velocity_derivative_conditioning"]
    table.write(
        os.path.join(folder, "conic_state.csv"),
        [
            "Motion from a start state under GM (1 - beta): classical closed forms (all conics, the repulsive branch, the straight line)",
            "in 80-digit arithmetic; derivatives of the end state by the start velocity, by central differences with a step of 1e-24.",
            "Three motions (beta 0.1, 1.5, 1.8; 12 d) are also integrated by mpmath's Taylor series solver and agree to 1e-18 (make_conic.py refuses",
            "to write otherwise).",
            "Source: " + table.versions("mpmath") + ", make_conic.py.",
            "Inputs are the doubles that the decimals mean; GM is the square of the exact decimal 0.01720209895, au^3/d^2.",
            "Units: au, au/day, days; dx_dvy0 is the derivative of x by the start velocity along y, day; dvx_dvy0 has no unit.",
            "Conditioning (relative; Frobenius norm for the derivatives): sum of the changes when each input and GM move by half a unit in",
            "the last place. Tolerance of a comparison: 1e-12 relative, or ten times the conditioning where that is worse (derivatives:",
            "1e-11, since one more differentiation stands between input and result). Of the regeneration: 1e-15 relative.",
        ],
        columns,
        rows,
    )


def cross_check():
    """Integrates three motions by Taylor series and compares: the closed forms and their derivation stand on more than one leg."""
    starts = list(state_inputs())[1:9]
    for r0, v0, beta, _ in (starts[0], starts[4], starts[7]):
        mu = MU * (1 - mpf(beta))

        def flow(_, y):
            r3 = (y[0] ** 2 + y[1] ** 2 + y[2] ** 2) ** mpf("1.5")
            return [y[3], y[4], y[5]] + [-mu * y[i] / r3 for i in range(3)]

        state = [mpf(x) for x in list(r0) + list(v0)]
        with mp.workdps(24):
            end = mp.odefun(flow, 0, state)(12)
        place, velocity = propagate(mu, state[:3], state[3:], mpf(12))
        for got, wanted in zip(end, place + velocity):
            if abs(got - wanted) > mpf(10) ** -18:
                raise ArithmeticError(f"closed form and Taylor series disagree: {got} {wanted}")


def make(folder):
    make_perihelion(folder)
    make_state(folder)


CHECKS = {"conic_perihelion.csv": (1e-15, 0.0), "conic_state.csv": (1e-15, 1e-30)}

if __name__ == "__main__":
    make(os.path.dirname(os.path.abspath(__file__)))
