"""Makes cutoff_layer_far.csv: the transition functions far from cut-off and round the seam of the
two regions, by the closed form in Airy functions with mpmath (working precision raised until two
precisions agree). Run: python3 cutoff_layer_far.py > cutoff_layer_far.csv"""
import random
from mpmath import mp, mpf, mpc, airyai, exp, sqrt, pi, frexp, log, nstr

random.seed(20)


def layer(t, y, sign):
    e3 = exp(mpc(0, -sign * 2) * pi / 3)
    b = mpc(0, 1) * y - t * t / 2
    w = mpf(2) ** (mpf(-1) / 3) * b
    e = exp(t * y / 2 + mpc(0, 1) * t**3 / 6)
    i0 = mpf(2) ** (mpf(-1) / 3) * 2 * pi * mpc(0, 1) * e3 * airyai(e3 * w)
    i1 = mpf(2) ** (mpf(-2) / 3) * 2 * pi * mpc(0, 1) * e3**2 * airyai(e3 * w, derivative=1)
    s = sqrt(2 / pi) * sign * e
    i = mpc(0, 1)
    return s * (i1 - i * t / 2 * i0), i * s * (b / 2 * i0 - i * t * i1 - t * t / 4 * i0)


def sure(t, y, sign):
    last, prec = None, 400
    while True:
        mp.prec = prec
        now = layer(mpc(t), mpc(y), sign)
        if last and all(abs(a - b) <= abs(a) * mpf(2) ** -90 for a, b in zip(now, last)):
            return now
        last, prec = now, 2 * prec


def row(t, y):
    out = [repr(t.real), repr(t.imag), repr(y.real), repr(y.imag)]
    for sign in (1, -1):
        u, uy = sure(t, y, sign)
        n = int(frexp(max(abs(u), abs(uy)))[1])
        out.append(str(n))
        for v in (u, uy):
            v = v * mpf(2) ** -n
            out += [nstr(v.real, 20), nstr(v.imag, 20)]
    print(",".join(out))


print("# Transition functions as in cutoff_layer.csv, far out and round |zeta| = 18; y complex in a third")
print("# of the rows. Values are (mantissa) * 2^exponent. Made by cutoff_layer_far.py (mpmath).")
print("t_re,t_im,y_re,y_im,ub_exp,ub_re,ub_im,ub_y_re,ub_y_im,uf_exp,uf_re,uf_im,uf_y_re,uf_y_im")
for i in range(240):
    if i < 80:  # seam: |zeta| = (2/3)(2^(-1/3)|b|)^(3/2) near 18
        t = complex(random.uniform(-5, 5))
        y = complex(random.choice([0, random.uniform(0, 14)]))
        b = abs(1j * y - t * t / 2) or 1.0
        f = (11.34 / b) ** 0.5 * random.uniform(0.97, 1.03)
        t, y = t * f, y * f * f
    else:
        size = 10 ** random.uniform(0.5, 3.5)
        t = complex(random.choice([-1, 1]) * size)
        y = complex(random.choice([0, 10 ** random.uniform(-2, 1), size * size * random.uniform(0, 2)]))
    if i % 3 == 1:
        t += 1j * random.uniform(-0.2, 0.2) * abs(t)
    if i % 3 == 2:
        t += 1j * random.uniform(-0.1, 0.1) * abs(t)
        y *= 1 + 1j * random.uniform(-0.2, 0.2)
    row(t, y)
