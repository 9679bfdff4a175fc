"""Reference values of the incomplete gamma functions for severity/special.

    python3 generate.py random   > random.csv
    python3 generate.py switches > switches.csv
    python3 generate.py negative > negative.csv
    python3 generate.py gamma > gamma.csv
    python3 generate.py defect > defect.csv

mpmath 1.2.1, 60 digits. Arguments are IEEE doubles and are used exactly.

Method. Upper tail: Gauss-Legendre quadrature (mpmath.quad) of
    Gamma(a,z) z^-a e^z = int_0^inf exp(a u - z (e^u - 1)) u^k du,  k = 0, 1, 2,
whose ratios are the conditional moments of ln(T/z). Lower tail: the series
sum z^n / (a)_(n+1), differentiated term by term in a. Rows with z > max(a, 1/2) come
from the first, the others from the second; the other tail follows from
P + Q = 1 with its derivatives. Every 20th row is also compared with mpmath's
own gammainc and diff of it, and the program stops if they disagree.
No value here comes from the Go code under test.
"""
import random
import sys

import mpmath as mp

mp.mp.dps = 60

COLUMNS = ("a,z,tag,ln_gamma_a,digamma_a,trigamma_a,lnQ,lnP,"
           "dlnQ_da,dlnQ_dz,d2lnQ_da2,d2lnQ_dadz,d2lnQ_dz2,"
           "dlnP_da,dlnP_dz,d2lnP_da2,d2lnP_dadz,d2lnP_dz2")


def moments(a, z):
    """I0, I1, I2 of the upper integral."""
    def phi(u):
        return a * u - z * mp.expm1(u)
    # the end: phi has fallen by 150 below its largest value
    top = mp.mpf(0)
    if z < a:
        top = phi(mp.log(a / z))
    lo, hi = mp.mpf(0), mp.mpf(1)
    while phi(hi) > top - 150 or (z < a and hi < mp.log(a / z)):
        hi *= 2
    for _ in range(60):
        mid = (lo + hi) / 2
        if phi(mid) > top - 150 or (z < a and mid < mp.log(a / z)):
            lo = mid
        else:
            hi = mid
    pieces = max(4, int(hi / 2) + 1)
    grid = [hi * j / pieces for j in range(pieces + 1)]
    out = []
    for k in range(3):
        out.append(mp.quad(lambda u: u**k * mp.exp(phi(u)), grid, method="gauss-legendre"))
    return out


def lower_series(a, z):
    """sum t_n, sum dt_n/da, sum d2t_n/da2 with t_n = z^n / (a)_(n+1)."""
    t = 1 / a
    s1, s2 = 1 / a, 1 / a**2
    m0, m1, m2 = t, t * s1, t * (s1**2 + s2)
    n = 0
    eps = mp.eps * 100
    while True:
        n += 1
        r = 1 / (a + n)
        t *= z * r
        s1 += r
        s2 += r * r
        m0 += t
        m1 += t * s1
        m2 += t * (s1 * s1 + s2)
        if n > z - a and t * (s1 * s1 + s2) < eps * m2 * (1 - z * r) and t < eps * m0 * (1 - z * r):
            return m0, -m1, m2


def jets(a, z):
    """(value, da, dz, daa, daz, dzz) of ln Q and ln P."""
    a, z = mp.mpf(a), mp.mpf(z)
    lnf = (a - 1) * mp.log(z) - z - mp.loggamma(a)
    f = mp.exp(lnf)
    fz = f * ((a - 1) / z - 1)           # df/dz
    psi, psi1 = mp.psi(0, a), mp.psi(1, a)
    fa = f * (mp.log(z) - psi)           # df/da
    base = a * mp.log(z) - z - mp.loggamma(a)
    if z > max(a, mp.mpf(1) / 2):
        i0, i1, i2 = moments(a, z)
        lnq = base + mp.log(i0)
        q = mp.exp(lnq)
        m1 = i1 / i0
        d = m1 + mp.log(z) - psi
        dd = i2 / i0 - m1**2 - psi1
        qa, qaa = q * d, q * (dd + d * d)
        p = 1 - q
        lnp = mp.log1p(-q)
        pa, paa = -qa, -qaa
    else:
        m0, m1, m2 = lower_series(a, z)
        lnp = base + mp.log(m0)
        p = mp.exp(lnp)
        d = mp.log(z) - psi + m1 / m0
        dd = m2 / m0 - (m1 / m0)**2 - psi1
        pa, paa = p * d, p * (dd + d * d)
        q = 1 - p
        lnq = mp.log1p(-p)
        qa, qaa = -pa, -paa
    up = (lnq, qa / q, -f / q, qaa / q - (qa / q)**2, -fa / q + f * qa / q**2, -fz / q - (f / q)**2)
    lo = (lnp, pa / p, f / p, paa / p - (pa / p)**2, fa / p - f * pa / p**2, fz / p - (f / p)**2)
    return up, lo


def check(a, z, up, lo):
    """Against mpmath's own gammainc, where it can do it."""
    if a > 2000 or z > 2000 or a < 1e-6:
        return
    with mp.workdps(90):
        a, z = mp.mpf(a), mp.mpf(z)
        lnq = lambda s: mp.log(mp.gammainc(s, z, regularized=True))
        lnp = lambda s: mp.log(mp.gammainc(s, 0, z, regularized=True))
        for fn, jet in ((lnq, up), (lnp, lo)):
            want = [fn(a), mp.diff(fn, a), mp.diff(fn, a, 2)]
            got = [jet[0], jet[1], jet[3]]
            for w, g in zip(want, got):
                # differences of a logarithm near zero lose absolute, not relative digits
                if abs(w - g) > mp.mpf(10)**-25 * max(abs(w), mp.mpf(10)**-8):
                    sys.exit(f"disagreement at a={a} z={z}: {w} {g}")


def text(x):
    return mp.nstr(x, 19, strip_zeros=True, min_fixed=-5, max_fixed=17)


def emit(rows):
    print(COLUMNS)
    for i, (a, z, tag) in enumerate(rows):
        # the powers of 1/a in the derivatives of ln Q cancel to the order of 1
        with mp.workdps(160 if a < 1e-4 else 60):
            up, lo = jets(a, z)
        if i % 20 == 0:
            check(a, z, up, lo)
        if a == 1:
            up = up[:5] + (mp.mpf(0),)  # ln Q = -z exactly
        am = mp.mpf(a)
        cells = [repr(a), repr(z), tag]
        cells += [text(v) for v in (mp.loggamma(am), mp.psi(0, am), mp.psi(1, am), up[0], lo[0])]
        cells += [text(v) for v in up[1:]] + [text(v) for v in lo[1:]]
        print(",".join(cells))
        sys.stdout.flush()


def random_rows():
    rng = random.Random(20260117)
    rows = []

    def loguniform(lo, hi):
        return float(lo * (hi / lo) ** rng.random())

    for _ in range(500):
        a = loguniform(1e-4, 1e7)
        rows.append((a, a * loguniform(1e-6, 30), "ratio"))
    for _ in range(500):
        a = loguniform(0.5, 1e7)
        z = a + rng.uniform(-12, 12) * a**0.5
        if z > 0:
            rows.append((a, z, "transition"))
    for _ in range(150):
        a = loguniform(1e-4, 1e6)
        rows.append((a, a + loguniform(10, 1e5), "tail"))
    for _ in range(150):
        a = 1 + rng.choice([-1, 1]) * loguniform(2.3e-16, 0.3)
        rows.append((a, loguniform(1e-9, 60), "near one"))
    for _ in range(150):
        a = float(rng.randint(1, 60)) / 2
        rows.append((a, a * loguniform(1e-3, 8), "half integer"))
    for _ in range(150):
        a = loguniform(1e-4, 5)
        rows.append((a, loguniform(1e-100, 1e-3), "tiny z"))
    for _ in range(250):
        a = loguniform(0.05, 200)
        rows.append((a, loguniform(1e-3, 400), "ordinary"))
    for _ in range(150):
        a = loguniform(1e-4, 1)
        rows.append((a, loguniform(0.05, 5), "small shape"))
    for _ in range(60):
        a = loguniform(1e-30, 1e-4)
        rows.append((a, loguniform(1e-30, 100), "extreme"))
    for _ in range(40):
        a = loguniform(1e7, 1e9)
        rows.append((a, a + rng.uniform(-30, 30) * a**0.5, "extreme"))
    for _ in range(80):
        a = loguniform(20, 1e6)
        z = a + rng.uniform(-38, 38) * a**0.5
        if z > 0:
            rows.append((a, z, "deep"))
    for _ in range(40):
        # near the zeros of ln Gamma at 2 and of digamma at 1.4616...
        a = rng.choice([2.0, 1.4616321449683623]) + rng.choice([-1, 1]) * loguniform(1e-15, 0.1)
        rows.append((a, loguniform(1e-2, 10), "zeros"))
    return rows


def switch_rows():
    """Both sides of every change of algorithm (see severity/special/doc.go)."""
    rows = []
    eps = 1e-9
    for edge in (0.25, 0.5, 0.75, 1.0, 1.25, 1.5, 2.0, 2.5, 10.0, 40.0, 60.0, 100.0, 150.0, 200.0):
        for a in (edge * (1 - eps), edge, edge * (1 + eps)):
            for z in (0.01, 0.3, 1.0, 1.5 - eps, 1.5, 1.5 + eps, 2 - eps, 2.0, 2 + eps, 3.0,
                      a / 2, a * (1 - eps), a, a * (1 + eps), 1.5 * a, 3 * a):
                rows.append((float(a), float(z), "switch"))
    for a in (300.0, 3e3, 3e5, 3e6):
        for k in (-30, -8, -6, -5, -4, -3, -1, -1e-9, 0, 1e-9, 1, 3, 4, 5, 6, 8, 30):
            z = a + k * a**0.5
            if z > 0:
                rows.append((a, z, "switch"))
        for r in (0.3, 0.39999, 0.40001, 0.49999, 0.50001, 0.7, 1.3, 2.0):
            rows.append((a, r * a, "switch"))
    return rows


def negative():
    """ln Gamma(a,z), not normalised, a of either sign, with its derivatives."""
    rng = random.Random(20260118)
    print("a,z,ln_upper,da,dz,daa,daz,dzz")
    rows = []
    for a in (0.0, -1.0, -2.0, -5.0, -0.5, 0.5, -1e-10, 1e-10, -19.5, -20.5):
        for z in (1e-9, 1e-3, 0.05, 0.3, 0.999999, 1.0, 1.000001, 1.4, 1.5, 1.999999, 2.0, 5.0, 30.0, 800.0):
            rows.append((a, z))
    for _ in range(300):
        a = -float(1e-6 * (5e7) ** rng.random())
        z = float(1e-8 * 1e11 ** rng.random())
        rows.append((a, z))
    for _ in range(60):
        rows.append((rng.uniform(-1.5, 0.6), float(1e-8 * 1e10 ** rng.random())))
    for a, z in rows:
        am, zm = mp.mpf(a), mp.mpf(z)
        i0, i1, i2 = moments(am, zm)
        m1 = i1 / i0
        h = 1 / (zm * i0)
        out = (am * mp.log(zm) - zm + mp.log(i0), mp.log(zm) + m1, -h, i2 / i0 - m1**2, h * m1,
               -h * ((am - 1) / zm - 1 + h))
        print(",".join([repr(a), repr(z)] + [text(v) for v in out]))


def gamma_rows():
    """ln Gamma, its derivatives, and the differences that cancel at large a."""
    rng = random.Random(20260119)
    print("a,ln_gamma_a,digamma_a,trigamma_a,stirling_correction,log_minus_digamma")
    rows = [float(1e-12 * 1e27 ** rng.random()) for _ in range(200)]
    rows += [float(0.05 * 400 ** rng.random()) for _ in range(200)]
    for centre in (1.0, 2.0, 1.4616321449683623):
        rows += [centre + s * float(1e-15 * 1e14 ** rng.random()) for s in (1, -1) for _ in range(10)]
    rows += [0.25, 0.5, 1.0, 1.5, 2.0, 2.5, 9.999999999, 10.0, 10.000000001, 1e300]
    for a in rows:
        am = mp.mpf(a)
        with mp.workdps(700 if a > 1e30 else 60):
            lg, psi = mp.loggamma(am), mp.psi(0, am)
            out = (lg, psi, mp.psi(1, am),
                   lg - ((am - mp.mpf(1) / 2) * mp.log(am) - am + mp.log(2 * mp.pi) / 2),
                   mp.log(am) - psi)
            print(",".join([repr(a)] + [text(v) for v in out]))


def defect_rows():
    """x - ln(1+x)."""
    rng = random.Random(20260120)
    print("x,defect")
    rows = [float(s * 1e-9 * 1e9 ** rng.random()) for s in (1, -1) for _ in range(60)]
    rows += [float(1e12 ** rng.random()) for _ in range(40)]
    rows += [-0.5, -0.4999999999, -0.5000000001, 1.0, 0.9999999999, 1.0000000001, -0.999999, 1e-300]
    for x in rows:
        with mp.workdps(700 if abs(x) < 1e-30 else 60):
            print(f"{x!r},{text(mp.mpf(x) - mp.log1p(mp.mpf(x)))}")


if __name__ == "__main__":
    which = sys.argv[1]
    if which == "random":
        emit(random_rows())
    elif which == "switches":
        emit(switch_rows())
    elif which == "negative":
        negative()
    elif which == "gamma":
        gamma_rows()
    elif which == "defect":
        defect_rows()
