"""Layers of extreme gammas, with derivatives in ln shape and ln scale.

python3 extreme.py > extreme.csv     (Python 3.11, mpmath 1.3.0)

Every figure is a closed form in regularised incomplete gammas at 400 digits, so
that what cancels does not matter; derivatives are central differences of it
with a step of 1e-60. Inputs are the doubles nearest to what is written.
"""
from mpmath import mp, mpf, gammainc, sqrt, exp, log, loggamma, findroot
import sys

mp.dps = 400
STEP = mpf(10) ** -60


def upper(a, z):
    if z == 0:
        return mpf(1)
    if z == mp.inf:
        return mpf(0)
    # series of P = z^a e^-z / Gamma(a+1) * sum z^k / (a+1)...(a+k), all terms positive
    term = total = mpf(1)
    k = 0
    while term > total * mpf(10) ** -(mp.dps + 10):
        k += 1
        term *= z / (a + k)
        total += term
    p = exp(a * log(z) - z - loggamma(a + 1)) * total
    return 1 - p


def figures(la, lt, A, L):
    a, t = exp(la), exp(lt)
    z = A / t
    q = [upper(a + k, z) for k in range(3)]
    m1, m2 = a * t, a * (a + 1) * t * t
    t1 = m1 * q[1] - A * q[0]                       # E[(X-A)+]
    t2 = m2 * q[2] - 2 * A * m1 * q[1] + A * A * q[0]
    out = {"survival_attachment": q[0], "mean_excess": t1 / q[0]}
    out["limited_mean_attachment"] = m1 - t1
    out["loss_elimination_ratio"] = 1 - t1 / m1
    if L is None:
        e1, e2 = t1, t2
        out["survival_top"], out["limited_mean_top"] = mpf(0), m1
    else:
        B = A + L
        y = B / t
        r = [upper(a + k, y) for k in range(3)]
        u1 = m1 * r[1] - B * r[0]
        u2 = m2 * r[2] - 2 * B * m1 * r[1] + B * B * r[0]
        e1 = t1 - u1
        e2 = t2 - u2 - 2 * L * u1
        out["survival_top"], out["limited_mean_top"] = r[0], m1 - u1
    out["mean"], out["second_moment"] = e1, e2
    out["standard_deviation"] = sqrt(e2 - e1 * e1)
    out["mean_if_attached"] = e1 / q[0]
    out["standard_deviation_if_attached"] = sqrt(e2 / q[0] - (e1 / q[0]) ** 2)
    return out


CASES = [  # name, shape, scale, attachment, limit
    ("tiny_shape", 0.01, 1e6, 1000.0, 99000.0),
    ("tiny_shape_low", 0.01, 1e6, 1e-12, 1e-12),
    ("tiny_shape_ground_up", 0.01, 1e6, 0.0, 1e-6),
    ("tiny_shape_tail", 0.01, 1e6, 4e8, 1e7),
    ("tiny_shape_thin", 0.01, 1e6, 5e5, 1e-5),
    ("smaller_shape", 1e-4, 1e6, 2000.0, 8000.0),
    ("huge_shape", 1e4, 1.5, 15000.0, 300.0),
    ("huge_shape_below", 1e4, 1.5, 12000.0, 3500.0),
    ("huge_shape_tail", 1e4, 1.5, 19500.0, 500.0),
    ("huge_shape_thin", 1e4, 1.5, 15100.0, 1e-4),
    ("huge_shape_cap", 1e4, 1.5, 0.0, 14800.0),
    ("huge_shape_unlimited", 1e4, 1.5, 15200.0, None),
    ("tail_1e-200", 1.3, 3000.0, 1390000.0, 10000.0),
    ("tail_1e-200_unlimited", 0.4, 3000.0, 1375000.0, None),
    ("tail_1e-200_thin", 2.7, 3000.0, 1410000.0, 0.001),
    ("tail_1e-280_shape_30", 30.0, 1000.0, 770000.0, 2000.0),
    ("huge_shape_1e-200_unlimited", 1e4, 1.5, 19800.0, None),
    ("thin", 0.9, 7000.0, 20000.0, 1e-7),
    ("thin_low", 0.5, 20000.0, 1e-6, 1e-9),
    ("thin_ground_up", 1.3, 3000.0, 0.0, 1e-6),
    ("wide", 1.3, 3000.0, 1e-3, 1e9),
    ("exponential_tail", 1.0, 1000.0, 200000.0, 5000.0),
    ("moderate", 5.0, 800.0, 4500.0, 2500.0),
    ("moderate_below", 60.0, 50.0, 800.0, 400.0),
    ("cents", 0.8, 1e-2, 0.02, 0.05),
    ("large_units", 0.8, 1e12, 2e12, 5e12),
]

names = None
for name, a, t, A, L in CASES:
    a, t, A = mpf(a), mpf(t), mpf(A)
    L = None if L is None else mpf(L)
    la, lt = log(a), log(t)
    value = figures(la, lt, A, L)
    da = [figures(la + s * STEP, lt, A, L) for s in (1, -1)]
    dt = [figures(la, lt + s * STEP, A, L) for s in (1, -1)]
    if names is None:
        names = list(value)
        print("name,shape,scale,attachment,limit," + ",".join(f"{n},{n}_dlnshape,{n}_dlnscale" for n in names))
    row = [name, repr(float(a)), repr(float(t)), repr(float(A)), "unlimited" if L is None else repr(float(L))]
    for n in names:
        row += [mp.nstr(value[n], 20), mp.nstr((da[0][n] - da[1][n]) / (2 * STEP), 20), mp.nstr((dt[0][n] - dt[1][n]) / (2 * STEP), 20)]
    print(",".join(row))
    sys.stdout.flush()
