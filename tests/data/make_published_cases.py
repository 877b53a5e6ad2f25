"""Makes published_cases.csv: special functions at large parameters, by mpmath at 50 digits.

Every row is one integral of tests/published_cases.rs and the special function that it equals;
inputs are taken as exact doubles.
"""
import itertools
from mpmath import mp, mpf, mpc

mp.dps = 50
rows = []


def add(case, k, p, q, value, scale=None):
    p, q, value = mpc(p), mpc(q), mpc(value)
    scale = abs(value) if scale is None else scale
    if not mpf(10) ** -290 < abs(value) < mpf(10) ** 290:
        return
    num = lambda x: mp.nstr(x, 20)
    exact = lambda x: repr(float(x))
    rows.append(",".join([case, exact(k), exact(p.real), exact(p.imag), exact(q.real),
                          exact(q.imag), num(value.real), num(value.imag), num(scale)]))


# Bessel functions of order k (1 + a) and argument k e^(i t), t in q. Hankel functions that are exponentially small
# come from a difference: 50 digits and what that may lose (for k beyond 200 left out where it loses more than 25).
def bessel(k, a, t):
    with mp.workdps(50 + int(k / 2) if k <= 200 else 50):
        bessel_precisely(k, a, t)


def bessel_precisely(k, a, t):
    nu, x = mpf(k) * (1 + mpc(a)), mpf(k) * mp.exp(1j * mpf(t))
    width = max(abs(mp.sqrt(1 - (nu / x) ** 2)), mpf(k) ** (mpf(-1) / 3))
    j = mp.besselj(nu, x, maxprec=10**6)
    # The natural scale: that of the oscillation near a zero.
    scale = max(abs(j), abs((mp.besselj(nu - 1, x, maxprec=10**6) - nu / x * j)) / width)
    add("bessel_j", k, a, t, j, scale)
    for case, h in [("hankel_1", mp.hankel1), ("hankel_2", mp.hankel2)]:
        value = h(nu, x, maxprec=10**6)
        if k <= 200 or abs(value) > mpf(10) ** -25 * abs(j):
            add(case, k, a, t, value)


A = [-0.5, -0.1, -1e-2, -1e-3, -1e-6, 0.0, 1e-9, 1e-4, 1e-2, 0.1, 0.5, 0.2 + 0.1j, -0.3 - 0.2j, 1e-3j,
     -0.01 + 0.02j]
for k, a in itertools.product([10.0, 100.0, 1000.0], A):
    bessel(k, a, 0.0)
for k, a, t in itertools.product([10.0, 200.0], [-0.1, 0.0, 1e-3, 0.1 + 0.05j], [0.3, -0.8]):
    bessel(k, a, t)
for a in [-0.05, -1e-4, 0.0, 1e-3]:
    bessel(1e4, a, 0.0)

# Airy function at k^(2/3) e^(i t), t in p: through the Stokes line at 2 pi/3.
for k in [5.0, 30.0, 300.0]:
    for n in range(33):
        t = 1.5 + n * 0.05
        z = mpf(k) ** (mpf(2) / 3) * mp.exp(1j * mpf(t))
        ai = mp.airyai(z)
        scale = max(abs(ai), abs(mp.airyai(z, derivative=1)) / mp.sqrt(abs(z)))
        add("airy", k, t, 0, ai, scale)

# Parabolic cylinder functions U(k, sqrt(k) p), times Gamma(1/2 + k) k^(-k/2 - 1/4) e^(z^2/4).
for k in [10.0, 100.0]:
    for p in [0.5, 3.0, 1j, 1.9j, 1.999j, 2j, 2.001j, 2.1j, 3j, 0.3 + 2j, -0.3 + 2j, 1 + 1j, 1 - 2.5j, 0.1 + 2.3j]:
        z = mp.sqrt(mpf(k)) * mpc(p)
        u = mp.pcfu(mpf(k), z) * mp.exp(z * z / 4 + mp.loggamma(mpf(k) + mpf(1) / 2))
        add("cylinder", k, p, 0, u / mpf(k) ** (mpf(k) / 2 + mpf(1) / 4))

# U(-k, sqrt(k) p) sqrt(2 pi) e^(-z^2/4) k^(-k/2 - 1/4): oscillating for |p| < 2.
for k in [10.5, 100.5, 1000.5]:
    for p in [0.5, 1.5, 1.9, 1.99, 1.9999, 2.0, 2.000001, 2.01, 2.1, 2.5, 1.9 + 0.1j, 2 - 0.2j, 1 + 1j, 0.5 - 2j]:
        z = mp.sqrt(mpf(k)) * mpc(p)
        factor = mp.sqrt(2 * mp.pi) * mp.exp(-z * z / 4) / mpf(k) ** (mpf(k) / 2 + mpf(1) / 4)
        u = mp.pcfu(-mpf(k), z)
        # U' by DLMF 12.8.2.
        slope = mp.diff(lambda y: mp.pcfu(-mpf(k), y), z)
        width = mp.sqrt(mpf(k)) * max(abs(mp.sqrt(1 - mpc(p) ** 2 / 4)), mpf(k) ** (mpf(-1) / 3))
        add("hermite", k, p, 0, u * factor, max(abs(u), abs(slope) / width) * abs(factor))

# Gamma(z) z^(-z), z = k e^(i t), t in p.
for k, t in itertools.product([3.0, 10.0, 50.0, 1000.0], [0.0, 0.4, 0.9, 1.3, 1.5]):
    z = mpf(k) * mp.exp(1j * mpf(t))
    add("gamma", k, t, 0, mp.exp(mp.loggamma(z) - z * mp.log(z)))

# Regularised incomplete gamma function Q(k, p k); Gamma(k, p k) e^(p k) (p k)^(-k).
for k, p in itertools.product([10.0, 50.0, 100.0, 300.0, 1000.0],
                              [0.4, 0.7, 0.9, 0.97, 0.999, 1.0, 1.0001, 1.01, 1.1, 1.4, 2.0]):
    x = mpf(k) * mpf(p)
    q = mp.gammainc(mpf(k), x, mp.inf, regularized=True)
    add("gamma_q", k, p, 0, q)
    add("gamma_end", k, p, 0, q * mp.exp(mp.loggamma(mpf(k)) + x - mpf(k) * mp.log(x)))

# Fresnel: e^(-i k cos p) integral_X^inf e^(i s^2) ds, X = sqrt(2k) cos(p/2).
for k, p in itertools.product([10.0, 100.0, 1000.0],
                              [0.5, 2.0, 2.8, 3.0, 3.1, 3.14, 3.1415, 3.2, 3.5, 4.5]):
    x = mp.sqrt(2 * mpf(k)) * mp.cos(mpf(p) / 2)
    turn = mp.exp(-1j * mp.pi / 4)
    f = mp.sqrt(mp.pi) / 2 / turn * mp.erfc(turn * x)
    if p > 3.141592653589793:
        # Beyond the shadow boundary the integral keeps to its side: minus the other one.
        f -= mp.sqrt(mp.pi) / turn
    add("half_plane", k, p, 0, f * mp.exp(-1j * mpf(k) * mp.cos(mpf(p))))


def line(f, reach, panels):
    """Integral over -reach .. reach by Gauss-Legendre panels."""
    return mp.quad(f, mp.linspace(-reach, reach, panels + 1), maxdegree=7)


mp.dps = 30

# Ship's wake, angle p: integral of exp(i k (cos p - sin p sinh w) cosh w)/cosh w along
# w = s - i c tanh^2 s, two values of c. DLMF 36.13.1 after tan theta = sinh w: its real part.
for k in [10.0, 50.0, 300.0]:
    for p in [0.05, 0.2, 0.3, 0.339, 0.3398369094541219, 0.34, 0.35, 0.45, 0.7, 1.2]:
        values = []
        for c in [mpf("0.5") * mp.sqrt(10 / mpf(k)), mpf("0.7") * mp.sqrt(10 / mpf(k))]:
            def g(s, c=c):
                w = s - 1j * c * mp.tanh(s) ** 2
                d = 1 - 2j * c * mp.tanh(s) / mp.cosh(s) ** 2
                phase = (mp.cos(mpf(p)) - mp.sin(mpf(p)) * mp.sinh(w)) * mp.cosh(w)
                return mp.exp(1j * mpf(k) * phase) / mp.cosh(w) * d
            reach = mp.log(600 / (mpf(k) * mp.sin(mpf(p)) * mp.sin(c))) / 2 + 3
            values.append(line(g, reach, 40 + int(k / 3)))
        agreement = abs(values[0] - values[1]) / abs(values[0])
        print("wake", k, p, mp.nstr(agreement, 3))
        if agreement < mpf(10) ** -18:
            add("wake", k, p, 0, values[0], mp.sqrt(1 / mpf(k)))

# Cusp: integral of exp(i k (24 (cosh t - 1 - t^2/2) + p t^2 + q t))/(1 + t^2/16) over the real line,
# along t = s + i c tanh s, two values of c.
t0 = mpf("0.3")
caustic2 = float(-12 * (mp.cosh(t0) - 1))
CUSP = [(0.0, 0.0), (1e-3, 1e-4), (-1.0, 0.2), (0.5, 0.7), (-2.0, 1.0), (caustic2, None)]
for k, (p, q) in itertools.product([5.0, 20.0, 100.0], CUSP):
    if q is None:
        t0 = mp.acosh(1 - mpf(p) / 12)
        q = float(-(24 * (mp.sinh(t0) - t0) + 2 * mpf(p) * t0))
    values = []
    for c in [mpf("0.3") * mp.sqrt(5 / mpf(k)), mpf("0.5") * mp.sqrt(5 / mpf(k))]:
        def g(s, c=c):
            t = s + 1j * c * mp.tanh(s)
            d = 1 + 1j * c / mp.cosh(s) ** 2
            f = 24 * (mp.cosh(t) - 1 - t * t / 2) + mpf(p) * t * t + mpf(q) * t
            return mp.exp(1j * mpf(k) * f) / (1 + t * t / 16) * d
        values.append(line(g, 6, 60 + int(k)))
    agreement = abs(values[0] - values[1]) / abs(values[0])
    print("cusp", k, p, q, mp.nstr(agreement, 3))
    assert agreement < mpf(10) ** -18
    add("cusp", k, p, q, values[0])

HEAD = """# published_cases.csv: integrals of tests/published_cases.rs and the special functions they equal, by mpmath.
# Functions at 50 digits; `cusp` and `wake` by Gauss-Legendre panels at 30 digits, two paths agreeing to 18.
# Inputs k, p, q are exact doubles; outputs 20 digits; scale: natural scale of the function (its modulus away from zeros).
# Made by make_published_cases.py, which says what each case is.
case,k,p_re,p_im,q_re,q_im,value_re,value_im,scale"""
with open("published_cases.csv", "w") as out:
    out.write("\n".join([HEAD] + rows) + "\n")
