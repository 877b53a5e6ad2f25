"""Writes tests/data/airy_complex_zeros.csv: the complex zeros of Bi and Bi' in the upper half plane.

    python3 tests/data/make_airy_complex_zeros.py > tests/data/airy_complex_zeros.csv
"""

from mpmath import airybi, expjpi, findroot, log, mp, mpc, mpf, nstr, pi

mp.dps = 40


def newton(z, derivative):
    for _ in range(60):
        f, g = airybi(z, derivative=derivative), airybi(z, derivative=1 - derivative)
        step = f / g if derivative == 0 else f / (z * g)
        z -= step
        if abs(step) < mpf(10) ** -34 * abs(z):
            return z
    raise ArithmeticError(z)


print("# Complex zeros of Bi (beta_k) and Bi' (betap_k) in the upper half plane, with Bi'(beta_k) and Bi(betap_k). DLMF 9.9(i).")
print("# Newton's iteration in 40 digits (mpmath) from the leading terms of DLMF 9.9.14, 9.9.16; each zero was checked to lie within 0.3 of them in the phase.")
print("k,beta_re,beta_im,bip_re,bip_im,betap_re,betap_im,bi_re,bi_im")
for k in list(range(1, 31)) + [100, 1000, 10000, 100000]:
    row = [str(k)]
    for j, derivative in ((1, 0), (3, 1)):
        t = mpc(3 * pi * (4 * k - j) / 8, 3 * log(2) / 4)
        z = newton(expjpi(mpf(1) / 3) * t ** (mpf(2) / 3), derivative)
        assert abs((z * expjpi(-mpf(1) / 3)) ** mpf(1.5) - t) < 0.3
        for value in (z, airybi(z, derivative=1 - derivative)):
            row += [nstr(value.real, 25), nstr(value.imag, 25)]
    print(",".join(row))
