"""Prints the coefficients of the expansions T, V, U, W of DLMF 9.9.18 to 9.9.21, further than there.

Bi + i Ai at -y is (E - i O) e^(i(xi + pi/4)) up to a positive factor (DLMF 9.7.9, 9.7.11), with
xi = (2/3) y^(3/2) and E, O the even and odd parts in 1/xi. So the zeros lie where
xi - atan(O/E) = t', and moduli and Wronskian give the associated values. DLMF's t is 3 t'/2.
Rational arithmetic; power series are lists of coefficients.

    python3 tests/data/make_airy_zero_series.py
"""

from fractions import Fraction

N = 16


def multiply(a, b):
    return [sum(a[j] * b[n - j] for j in range(n + 1)) for n in range(N)]


def power(f, alpha):
    """f^alpha for f = 1 + ..."""
    g = [Fraction(1)]
    for n in range(1, N):
        g.append(sum((alpha * j - (n - j)) * f[j] * g[n - j] for j in range(1, n + 1)) / n)
    return g


def atan(r):
    total, term, square = [Fraction(0)] * N, r, multiply(r, r)
    for m in range(N):
        total = [a + Fraction((-1) ** m, 2 * m + 1) * b for a, b in zip(total, term)]
        term = multiply(term, square)
    return total


def compose(f, x):
    total = [Fraction(0)] * N
    for c in reversed(f):
        total = multiply(total, x)
        total[0] += c
    return total


u = [Fraction(1)]
for k in range(1, N):
    u.append(u[-1] * Fraction((6 * k - 5) * (6 * k - 3) * (6 * k - 1), 216 * k * (2 * k - 1)))
v = [-Fraction(6 * k + 1, 6 * k - 1) * c if k else c for k, c in enumerate(u)]

for names, c, alpha in (("TV", u, Fraction(-1, 6)), ("UW", v, Fraction(1, 6))):
    even = [(-1) ** (k // 2) * a if k % 2 == 0 else Fraction(0) for k, a in enumerate(c)]
    odd = [(-1) ** (k // 2) * a if k % 2 == 1 else Fraction(0) for k, a in enumerate(c)]
    angle = atan(multiply(odd, power(even, Fraction(-1))))
    # X = 1/xi as a series in s = 1/t': X = s/(1 + s angle(X)).
    s = [Fraction(int(n == 1)) for n in range(N)]
    x = s
    for _ in range(N):
        denominator = multiply(s, compose(angle, x))
        denominator[0] += 1
        x = multiply(s, power(denominator, Fraction(-1)))
    ratio = x[1:] + [Fraction(0)]
    modulus = power(compose([a + b for a, b in zip(multiply(even, even), multiply(odd, odd))], x), Fraction(-1, 2))
    for name, series in (
        (names[0], power(ratio, Fraction(-2, 3))),
        (names[1], multiply(power(ratio, alpha), modulus)),
    ):
        print(name, *[f * Fraction(9, 4) ** (n // 2) for n, f in enumerate(series[:15]) if n % 2 == 0])
