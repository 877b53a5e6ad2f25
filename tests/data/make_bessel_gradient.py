"""bessel_gradient.csv: J_nu(x) with its derivatives in argument and order, by mpmath at 60 digits.

x = k X, nu = k N with X, N the exact doubles of the table, through the coalescence X = N. The derivative in
the argument is (J_(nu-1) - J_(nu+1))/2 (DLMF 10.6.1), that in the order a central difference at
60 digits with step 1e-18 (error some 1e-36 times the third derivative). Both are multiplied by k:
they are derivatives in X and N."""
from mpmath import mp, mpf, besselj, nstr

mp.dps = 60
rows = []
for k in [5.0, 10.0, 100.0, 3000.0]:
    for x, n in [(1.0, 1.0), (1.0, 1.000000001), (1.0, 1.01), (1.0, 0.99), (1.0, 1.3), (1.0, 0.5), (0.95, 1.02), (1.2, 0.9)]:
        arg, nu = mpf(k) * mpf(x), mpf(k) * mpf(n)
        h = mpf(10) ** -18
        j = besselj(nu, arg)
        dx = (besselj(nu - 1, arg) - besselj(nu + 1, arg)) / 2 * k
        dn = (besselj(nu + h, arg) - besselj(nu - h, arg)) / (2 * h) * k
        rows.append([repr(k), repr(x), repr(n)] + [nstr(v, 20) for v in (j, dx, dn)])

with open("bessel_gradient.csv", "w") as out:
    out.write("# bessel_gradient.csv: J_nu(x), nu = k n, x = k x, and its derivatives in x and n (times k), by mpmath\n")
    out.write("# at 60 digits; 20 digits; inputs exact doubles. Made by make_bessel_gradient.py.\n")
    out.write("k,x,n,j,dj_dx,dj_dn\n")
    for row in rows:
        out.write(",".join(row) + "\n")
