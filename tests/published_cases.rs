//! Published worked cases, each computed from its integral alone and compared with the function
//! that it equals.
//!
//! Table: tests/data/published_cases.csv (mpmath; its script says what each case is). A row's error counts
//! against the natural scale of the function, which is its modulus away from zeros. Every error must
//! lie below the error figure that comes with the value, and below the bar of its case.
// `!(a <= b)` is meant: NaN must fail.
// Bars are read from the first range that fits.
#![allow(clippy::neg_cmp_op_on_partial_ord, clippy::match_overlapping_arm, clippy::type_complexity)]

use merging_saddles::integral::{Amplitude, Polynomial};
use merging_saddles::{Complex64, Contour, Integral, Phase};
use std::f64::consts::{FRAC_PI_2, FRAC_PI_4, PI};

type C = Complex64;

const I: C = C::new(0.0, 1.0);

fn c(re: f64, im: f64) -> C {
    C::new(re, im)
}

struct Row {
    k: f64,
    p: C,
    q: C,
    value: C,
    scale: f64,
}

fn rows(case: &str) -> Vec<Row> {
    let lines = include_str!("data/published_cases.csv").lines();
    let rows: Vec<Row> = lines
        .filter(|line| line.split(',').next() == Some(case))
        .map(|line| {
            let fields: Vec<&str> = line.split(',').collect();
            let number = |n: usize| fields[n].parse::<f64>().expect("a number");
            Row {
                k: number(1),
                p: c(number(2), number(3)),
                q: c(number(4), number(5)),
                value: c(number(6), number(7)),
                scale: number(8),
            }
        })
        .collect();
    assert!(!rows.is_empty(), "no row of {case}");
    rows
}

/// What was measured in one case.
#[derive(Default)]
struct Tally {
    faults: Vec<String>,
    /// Wavenumber, error, figure; both over the scale.
    measured: Vec<(f64, f64, f64)>,
}

impl Tally {
    /// `I(k)` times `factor` against a value.
    fn enter<P: Phase, A: Amplitude>(
        &mut self,
        integral: &Integral<P, A>,
        k: f64,
        factor: C,
        (value, scale): (C, f64),
        label: &str,
    ) {
        let got = match integral.plan().and_then(|plan| plan.at(k)) {
            Ok(got) => got,
            Err(reason) => return self.faults.push(format!("k {k} {label}: {reason}")),
        };
        let error = (got.value * factor - value).norm() / scale;
        let figure = got.error * factor.norm() / scale;
        // The table and the factor are rounded to doubles.
        let doubt = 4.0 * f64::EPSILON * value.norm() / scale;
        if !(error <= figure + doubt) {
            self.faults.push(format!("k {k} {label}: error {error:.1e}, figure {figure:.1e}"));
        }
        self.measured.push((k, error, figure));
    }

    /// No row may lack a value or be outside its figure; errors lie below `bar(k)`.
    fn check(mut self, name: &str, bar: fn(f64) -> f64) {
        self.measured.sort_by(|a, b| a.0.total_cmp(&b.0));
        let all = self.measured.len() + self.faults.len();
        for group in self.measured.chunk_by(|a, b| a.0 == b.0) {
            let most = |f: fn(&(f64, f64, f64)) -> f64| group.iter().map(f).fold(0.0, f64::max);
            let (error, figure) = (most(|m| m.1), most(|m| m.2));
            println!(
                "{name} k {}: {} values, worst error {error:.1e}, largest figure {figure:.1e}",
                group[0].0,
                group.len()
            );
            if !(error <= bar(group[0].0)) {
                self.faults.push(format!("k {}: error {error:.1e} above the bar", group[0].0));
            }
        }
        assert!(self.faults.is_empty(), "{name}, {all} rows: {:#?}", self.faults);
    }
}

/// `exp(k h)`: the phase is `-i h`.
fn exponent(h: impl Fn(C) -> (C, C)) -> impl Fn(C) -> (C, C) {
    move |z| {
        let (h, d) = h(z);
        (-I * h, -I * d)
    }
}

/// `(1 + a) k`, the order, and `k e^(i t)`, the argument, of DLMF 10.9.17 and 10.9.18.
fn bessel(a: C, t: f64) -> impl Fn(C) -> (C, C) {
    let turn = C::from_polar(1.0, t) - 1.0;
    exponent(move |z: C| {
        let (sinh, cosh) = (z.sinh(), z.cosh());
        ((sinh - z) + (turn * sinh - a * z), cosh - 1.0 + (turn * cosh - a))
    })
}

fn bessel_bar(k: f64) -> f64 {
    match k as u64 {
        ..=10 => 1e-10,
        ..=100 => 3e-13,
        _ => f64::max(3e-13, 4.0 * k * f64::EPSILON),
    }
}

#[test]
fn bessel_functions_of_large_order_and_argument() {
    let mut tally = Tally::default();
    for row in rows("bessel_j") {
        let t = row.q.re;
        // J_nu(x) = 1/(2 pi i) integral from infinity - pi i to infinity + pi i (DLMF 10.9.17).
        let contour = Contour::through([c(3.0, -PI - t), c(0.0, 0.0), c(3.0, PI - t)]);
        let integral = Integral::new(bessel(row.p, t), contour);
        let label = format!("a {} t {t}", row.p);
        tally.enter(&integral, row.k, -I / (2.0 * PI), (row.value, row.scale), &label);
    }
    tally.check("J", bessel_bar);
}

#[test]
fn hankel_functions_of_large_order_and_argument() {
    for (case, sign) in [("hankel_1", 1.0), ("hankel_2", -1.0)] {
        let mut tally = Tally::default();
        for row in rows(case) {
            let t = row.q.re;
            // H_nu(x) = +-1/(pi i) integral from -infinity to infinity +- pi i (DLMF 10.9.18).
            let contour = Contour::through([c(-3.0, t), c(0.0, 0.0), c(3.0, sign * PI - t)]);
            let integral = Integral::new(bessel(row.p, t), contour);
            let label = format!("a {} t {t}", row.p);
            tally.enter(&integral, row.k, -I * sign / PI, (row.value, row.scale), &label);
        }
        tally.check(case, bessel_bar);
    }
}

#[test]
fn airy_function_through_its_stokes_line() {
    // Ai(z) = 1/(2 pi i) integral from infinity e^(-pi i/3) to infinity e^(pi i/3) of
    // exp(t^3/3 - z t) (DLMF 9.5.4), t = k^(1/3) s, z = k^(2/3) e^(i theta), theta in steps of 0.05
    // from 1.5 to 3.1; a Stokes line lies at 2 pi/3.
    let mut tally = Tally::default();
    for row in rows("airy") {
        let zeta = C::from_polar(1.0, row.p.re);
        let end = C::from_polar(2.5, PI / 3.0);
        let integral = Integral::new(
            exponent(move |s: C| ((s * s / 3.0 - zeta) * s, s * s - zeta)),
            Contour::through([end.conj(), c(0.0, 0.0), end]),
        );
        let factor = -I * row.k.cbrt() / (2.0 * PI);
        tally.enter(&integral, row.k, factor, (row.value, row.scale), &format!("{}", row.p.re));
    }
    tally.check("Ai", |k| if k < 10.0 { 1e-12 } else { f64::max(1e-13, 4.0 * k * f64::EPSILON) });
}

#[test]
fn parabolic_cylinder_functions_through_turning_points() {
    // U(k, z) = e^(-z^2/4)/Gamma(1/2 + k) integral from 0 to infinity of t^(k-1/2) exp(-t^2/2 - z t)
    // (DLMF 12.5.1), t = sqrt(k) s, z = sqrt(k) zeta: turning points at zeta = +-2i.
    let mut tally = Tally::default();
    for row in rows("cylinder") {
        let zeta = row.p;
        let saddle = ((zeta * zeta + 4.0).sqrt() - zeta) * 0.5;
        let integral = Integral::new(
            exponent(move |s: C| (s.ln() - (s * 0.5 + zeta) * s, s.inv() - s - zeta)),
            // From the singularity at zero over the saddle to infinity.
            Contour::through([saddle * 0.1, saddle, c(4.0, 0.0)]),
        )
        .amplitude(|s: C| s.sqrt().inv());
        let label = format!("zeta {zeta}");
        tally.enter(&integral, row.k, c(1.0, 0.0), (row.value, row.scale), &label);
    }
    tally.check("U(k, z)", |k| if k < 50.0 { 1e-6 } else { 1e-12 });
}

#[test]
fn hermite_functions_near_their_turning_point() {
    // U(-k, z) = e^(z^2/4)/(i sqrt(2 pi)) integral from c - i infinity to c + i infinity of
    // t^(k-1/2) exp(t^2/2 - z t) (DLMF 12.5.6), z = sqrt(k) zeta; for k = n + 1/2 it is
    // 2^(-n/2) e^(-z^2/4) H_n(z/sqrt 2) (DLMF 12.7.2), with its turning point at zeta = 2.
    let mut tally = Tally::default();
    for row in rows("hermite") {
        let zeta = row.p;
        let integral = Integral::new(
            exponent(move |s: C| (s.ln() + (s * 0.5 - zeta) * s, s.inv() + s - zeta)),
            Contour::through([c(1.0, -4.0), c(1.0, 0.0), c(1.0, 4.0)]),
        )
        .amplitude(|s: C| s.sqrt().inv());
        let label = format!("zeta {zeta}");
        tally.enter(&integral, row.k, -I, (row.value, row.scale), &label);
    }
    tally.check(
        "Hermite",
        // At k = 10.5 saddles too far apart to be taken together set the limit.
        |k| if k < 50.0 { 1e-8 } else { f64::max(1e-12, 4.0 * k * f64::EPSILON) },
    );
}

/// `exp(-x/2)` times the Laguerre polynomials `L_n^(a)(x)` and `L_(n-1)^(a)(x)`, by their recurrence
/// (DLMF 18.9.1, Table 18.9.1).
fn laguerre(n: usize, a: f64, x: C) -> (C, C) {
    let mut last = c(0.0, 0.0);
    let mut here = (x * -0.5).exp();
    for m in 0..n {
        let m = m as f64;
        let next = ((2.0 * m + a + 1.0 - x) * here - (m + a) * last) / (m + 1.0);
        (last, here) = (here, next);
    }
    (here, last)
}

#[test]
fn laguerre_polynomials_through_their_turning_point() {
    // The generating function (1 - z)^(-a-1) exp(x z/(z - 1)) (DLMF 18.12.13) gives L_n^(a)(x) by Cauchy's
    // formula on a loop round z = 0 that begins and ends at z = 1; with z = -e^s, k = n + (a + 1)/2,
    // x = k xi,
    // exp(-x/2) L_n^(a)(x) = (-1)^n 2^(-a-1)/(2 pi i) integral of exp(k (xi/2 tanh(s/2) - s)) cosh(s/2)^(-a-1)
    // from -i pi to i pi, both ends met from the left. The saddles merge at xi = 4, the turning point
    // (DLMF 18.15(iv)).
    let arguments = [
        c(1.0, 0.0),
        c(2.5, 0.0),
        c(3.5, 0.0),
        c(3.9, 0.0),
        c(3.999, 0.0),
        c(4.0, 0.0),
        c(4.0 + 1e-6, 0.0),
        c(4.1, 0.0),
        c(4.5, 0.0),
        c(3.8, 0.3),
        c(4.2, -0.2),
    ];
    let mut tally = Tally::default();
    for (n, a) in [(10, 0.0), (10, 2.0), (50, 0.0), (50, 1.0), (280, 0.0), (280, 3.0)] {
        for xi in arguments {
            let k = n as f64 + (a + 1.0) / 2.0;
            let x = xi * k;
            let (value, last) = laguerre(n, a, x);
            // (exp(-x/2) L_n)' from L_n and L_(n-1) (DLMF 18.9.14 and 18.9.23), over the size of its rate.
            let slope = (n as f64 * value - (n as f64 + a) * last) / x - value * 0.5;
            let rate = (4.0 / xi - 1.0).norm().sqrt().max((2.0 * k).powf(-1.0 / 3.0)) * 0.5;
            let scale = value.norm().max(slope.norm() / rate);
            let integral = Integral::new(
                exponent(move |s: C| {
                    let t = (s * 0.5).tanh();
                    (xi * 0.5 * t - s, xi * 0.25 * (1.0 - t * t) - 1.0)
                }),
                Contour::through([c(-0.3, -PI), c(-1.0, 0.0), c(-0.3, PI)]),
            )
            .amplitude(move |s: C| (s * 0.5).cosh().powf(-a - 1.0));
            let sign = if n % 2 == 0 { 1.0 } else { -1.0 };
            let factor = -I * sign * 0.5f64.powf(a + 2.0) / PI;
            tally.enter(&integral, k, factor, (value, scale), &format!("a {a} xi {xi}"));
        }
    }
    tally.check("Laguerre", |k| if k < 50.0 { 1e-9 } else { 1e-12 });
}

#[test]
fn gamma_function_of_complex_argument() {
    // Gamma(z) z^(-z) = integral over the real line of exp(z (w - e^w)) (DLMF 5.9.1 with t = z e^w),
    // z = k e^(i theta).
    let mut tally = Tally::default();
    for row in rows("gamma") {
        let theta = row.p.re;
        let turn = C::from_polar(1.0, theta);
        let integral = Integral::new(
            exponent(move |w: C| (turn * (w - w.exp()), turn * (1.0 - w.exp()))),
            Contour::through([turn.conj() * -6.0, c(0.0, 0.0), c(2.5, -theta)]),
        );
        let label = format!("theta {theta}");
        tally.enter(&integral, row.k, c(1.0, 0.0), (row.value, row.scale), &label);
    }
    tally.check("Gamma", |k| match k as u64 {
        ..=3 => 1e-5,
        ..=10 => 1e-9,
        _ => f64::max(1e-13, 4.0 * k * f64::EPSILON),
    });
}

#[test]
fn reciprocal_gamma_function_from_a_loop_round_the_cut_of_the_logarithm() {
    // 1/Gamma(z) = 1/(2 pi i) integral of e^t t^(-z) on Hankel's loop round the negative axis (DLMF 5.9.2),
    // t = k s, z = k e^(i theta): both descents cross the cut of the logarithm and go on beyond it.
    let mut tally = Tally::default();
    for row in rows("gamma").iter().filter(|row| row.k <= 50.0) {
        let theta = row.p.re;
        let turn = C::from_polar(1.0, theta);
        let loop_round = [c(-4.0, -0.2), c(-1.0, -1.0), c(1.5, 0.0), c(-1.0, 1.0), c(-4.0, 0.2)];
        let integral = Integral::new(
            exponent(move |s: C| (s - turn * s.ln(), 1.0 - turn / s)),
            Contour::through(loop_round),
        );
        // Against z^z/Gamma(z) of the table.
        let factor = -I / (2.0 * PI) * row.k * (I * turn * (row.k * theta)).exp();
        let value = row.value.inv();
        tally.enter(&integral, row.k, factor, (value, value.norm()), &format!("theta {theta}"));
    }
    tally.check("1/Gamma", |k| match k as u64 {
        ..=3 => 1e-5,
        ..=10 => 1e-9,
        _ => 1e-13,
    });
}

#[test]
fn incomplete_gamma_function_with_a_pole_near_the_saddle() {
    // Q(a, x) = 1/(2 pi i) integral from c - i infinity to c + i infinity of
    // exp(a ((t - l) - ln(t/l)))/(l - t), 0 < c < l = x/a (N. M. Temme, Math. Comp. 29 (1975) 1109;
    // DLMF 8.12).
    let mut tally = Tally::default();
    for row in rows("gamma_q") {
        let l = row.p.re;
        let integral = Integral::new(
            exponent(move |t: C| ((t - l) - (t / l).ln(), 1.0 - t.inv())),
            Contour::through([c(-2.0, -3.0), c(0.6 * l.min(1.0), 0.0), c(-2.0, 3.0)]),
        )
        .amplitude(move |t: C| (l - t).inv())
        .pole(c(l, 0.0));
        let label = format!("x/a {l}");
        tally.enter(&integral, row.k, -I / (2.0 * PI), (row.value, row.scale), &label);
    }
    tally.check("Q(a, x)", |k| if k < 50.0 { 2e-10 } else { 1e-12 });
}

#[test]
fn incomplete_gamma_function_with_an_end_near_the_saddle() {
    // Gamma(a, x) e^x x^(-a) = integral from l to infinity of exp(-a ((s - l) - ln(s/l)))/s, l = x/a
    // (DLMF 8.2.2).
    let mut tally = Tally::default();
    for row in rows("gamma_end") {
        let l = row.p.re;
        let integral = Integral::new(
            exponent(move |s: C| ((s / l).ln() - (s - l), s.inv() - 1.0)),
            Contour::starting_at([c(l, 0.0), c(l + 3.0, 0.0)]),
        )
        .amplitude(|s: C| s.inv());
        let label = format!("x/a {l}");
        tally.enter(&integral, row.k, c(1.0, 0.0), (row.value, row.scale), &label);
    }
    tally.check("Gamma(a, x)", |k| if k < 50.0 { 2e-10 } else { 1e-12 });
}

#[test]
fn half_plane_diffraction_through_the_shadow_boundary() {
    // integral over the real line of exp(i r cosh s)/cosh((s + i p)/2) =
    // 4 sqrt(pi) e^(-i pi/4) e^(-i r cos p) integral_X^inf e^(i t^2) dt, X = sqrt(2 r) cos(p/2): the
    // field of a plane wave behind a half-plane (A. Sommerfeld, Math. Ann. 47 (1896) 317); Fresnel
    // integral DLMF 7.2(iii). The shadow boundary is p = pi, where the pole meets the saddle.
    let mut tally = Tally::default();
    for row in rows("half_plane") {
        let p = row.p.re;
        let mut integral = Integral::new(
            |s: C| (s.cosh(), s.sinh()),
            Contour::through([c(-3.0, -FRAC_PI_2), c(0.0, 0.0), c(3.0, FRAC_PI_2)]),
        )
        .amplitude(move |s: C| ((s + I * p) * 0.5).cosh().inv());
        for turns in [-1.0, 1.0, 3.0] {
            integral = integral.pole(c(0.0, turns * PI - p));
        }
        let factor = C::from_polar(0.25 / PI.sqrt(), FRAC_PI_4);
        tally.enter(&integral, row.k, factor, (row.value, row.scale), &format!("p {p}"));
    }
    tally.check("half-plane", |k| {
        if k < 50.0 { 1e-12 } else { f64::max(1e-12, 4.0 * k * f64::EPSILON) }
    });
}

#[test]
fn wake_of_a_ship_on_inside_and_outside_its_caustic() {
    // z(phi, rho) = integral over |theta| < pi/2 of cos(rho cos(theta + phi)/cos^2 theta)
    // (DLMF 36.13.1) is the real part of this integral with tan theta = sinh w; the two saddles merge
    // at phi = arcsin(1/3), 19.47 degrees (DLMF 36.13.4).
    let mut tally = Tally::default();
    for row in rows("wake") {
        let (sin, cos) = row.p.re.sin_cos();
        let integral = Integral::new(
            move |w: C| {
                let (s, h) = (w.sinh(), w.cosh());
                ((cos - sin * s) * h, (cos - sin * s) * s - sin * h * h)
            },
            Contour::through([c(-3.0, -FRAC_PI_4), c(0.0, 0.0), c(3.0, -FRAC_PI_4)]),
        )
        .amplitude(|w: C| w.cosh().inv())
        .pole(c(0.0, FRAC_PI_2))
        .pole(c(0.0, -FRAC_PI_2));
        let label = format!("phi {}", row.p.re);
        tally.enter(&integral, row.k, c(1.0, 0.0), (row.value, row.scale), &label);
    }
    // At k = 10 and 50 the saddles that lie mirrored at the pole of the amplitude set the limit.
    tally.check("wake", |k| match k as u64 {
        ..=10 => 1e-6,
        ..=50 => 1e-8,
        _ => 1e-12,
    });
}

/// `24 (cosh t - 1 - t^2/2) + x2 t^2 + x1 t` with amplitude `1/(1 + t^2/16)` over the real line.
fn cusp(x2: f64, x1: f64) -> Integral<impl Fn(C) -> (C, C), impl Fn(C) -> C> {
    Integral::new(
        move |t: C| {
            let f = 24.0 * (t.cosh() - 1.0 - t * t * 0.5) + (t * x2 + x1) * t;
            (f, 24.0 * (t.sinh() - t) + 2.0 * x2 * t + x1)
        },
        Contour::through([c(-3.0, -FRAC_PI_2), c(0.0, 0.0), c(3.0, FRAC_PI_2)]),
    )
    .amplitude(|t: C| (t * t / 16.0 + 1.0).inv())
    .pole(c(0.0, 4.0))
    .pole(c(0.0, -4.0))
}

#[test]
fn cusp_with_six_orders_at_k_5() {
    let mut faults = Vec::new();
    for row in rows("cusp").iter().filter(|row| row.k == 5.0) {
        let (x2, x1) = (row.p.re, row.q.re);
        let got = cusp(x2, x1).plan().and_then(|plan| plan.at_orders(5.0, 6)).expect("a value");
        let error = (got.value - row.value).norm() / row.scale;
        println!(
            "cusp ({x2}, {x1}): {error:.1e}, figure {:.1e} {:?}",
            got.relative_error, got.form
        );
        if !(error <= 1e-11 && error <= got.relative_error) {
            faults.push(format!("({x2}, {x1}): {error:.1e}, figure {:.1e}", got.relative_error));
        }
    }
    assert!(faults.is_empty(), "{faults:#?}");
}

#[test]
fn cusp_at_larger_wavenumbers() {
    let mut tally = Tally::default();
    for row in rows("cusp") {
        let label = format!("({}, {})", row.p.re, row.q.re);
        let integral = cusp(row.p.re, row.q.re);
        tally.enter(&integral, row.k, c(1.0, 0.0), (row.value, row.scale), &label);
    }
    tally.check("cusp", |k| if k < 20.0 { 1e-11 } else { 1e-12 });
}

#[test]
fn from_three_merged_saddles_to_three_isolated_ones() {
    // No value outside its figure, and no jump between neighbours beyond their figures: in differences, where a
    // systematic error of the figure's size would hide.
    for k in [5.0, 40.0] {
        let mut last: Option<(C, f64)> = None;
        let mut smallest = f64::INFINITY;
        let mut largest = 0.0f64;
        let mut forms = std::collections::BTreeSet::new();
        for n in 0..=300 {
            let s = (f64::from(n) / 300.0).powi(3);
            let integral = cusp(-8.0 * s, 1.5 * s);
            let got =
                integral.plan().and_then(|plan| plan.at(k)).unwrap_or_else(|e| panic!("{n}: {e}"));
            let exact = integral.quadrature(k, 1e-14).expect("the yardstick");
            let error = (got.value - exact.value).norm();
            let bound = got.error + exact.error;
            assert!(error <= bound, "k {k} step {n}: error {error:.1e}, figures {bound:.1e}");
            assert!(got.relative_error < 1e-8, "k {k} step {n}: figure {:.1e}", got.relative_error);
            let offset = got.value - exact.value;
            if let Some((before, figure)) = last {
                assert!((offset - before).norm() <= figure + bound, "k {k} step {n}: a jump");
            }
            last = Some((offset, bound));
            smallest = smallest.min(got.relative_error);
            largest = largest.max(got.relative_error);
            forms.insert(format!("{:?}", got.form));
        }
        println!("line k {k}: figures {smallest:.1e} .. {largest:.1e} {forms:?}");
        assert!(forms.len() > 1, "k {k}: {forms:?}");
    }
}

#[test]
fn fold_without_symmetry_and_with_amplitudes() {
    // exp(z) - z^2/2 - (1 + a) z: two saddles that merge at a = 0, a cubic with all higher powers.
    // Chester, Friedman & Ursell's case; the yardstick is asked for 1e-14.
    let amplitudes: [(&str, fn(C) -> C); 2] =
        [("cosh(z/3)", |z| (z / 3.0).cosh()), ("1/(9 + z^2)", |z| (z * z + 9.0).inv())];
    let mut faults = Vec::new();
    for (name, amplitude) in amplitudes {
        for k in [30.0, 100.0, 1000.0] {
            let mut worst = 0.0f64;
            for a in [-0.3, -0.05, -1e-3, -1e-6, 0.0, 1e-9, 1e-4, 1e-2, 0.2] {
                let integral = Integral::new(
                    exponent(move |z: C| {
                        (z.exp() - 1.0 - z - z * z * 0.5 - a * z, z.exp() - 1.0 - z - a)
                    }),
                    Contour::through([c(4.0, -PI), c(0.0, 0.0), c(4.0, PI)]),
                )
                .amplitude(amplitude);
                let got = integral.plan().and_then(|plan| plan.at(k)).expect("a value");
                let exact = integral.quadrature(k, 1e-14).expect("the yardstick");
                let error = (got.value - exact.value).norm();
                let relative = error / exact.value.norm();
                worst = worst.max(relative);
                let bar = f64::max(1e-13, 4.0 * k * f64::EPSILON);
                let covered = error <= got.error + exact.error;
                if !covered || !(relative <= bar.max(2.0 * exact.relative_error)) {
                    faults.push(format!(
                        "{name} k {k} a {a}: {relative:.1e}, figure {:.1e}, yardstick {:.1e}",
                        got.relative_error, exact.relative_error
                    ));
                }
            }
            println!("fold {name} k {k}: worst {worst:.1e}");
        }
    }
    assert!(faults.is_empty(), "{faults:#?}");
}

#[test]
fn error_function_from_a_saddle_near_a_pole() {
    // integral over the real line of exp(-k s^2)/(s - p) = pi i w(sqrt(k) p), the contour below p
    // (DLMF 7.7.2 continued); table tests/data/faddeeva.csv.
    let mut tally = Tally::default();
    let table = include_str!("data/faddeeva.csv").lines().filter(|line| !line.starts_with('#'));
    for (n, line) in table.skip(1).enumerate() {
        let x: Vec<f64> = line.split(',').map(|x| x.parse().expect("a number")).collect();
        let (z, w) = (c(x[0], x[1]), c(x[2], x[3]));
        // Powers of four: no rounding in p.
        let k: f64 = [4.0, 64.0, 4096.0][n % 3];
        let p = z / k.sqrt();
        let reach = 4.0 + 2.0 * p.norm();
        let below = c(p.re, p.im.min(0.0) - 0.5);
        let integral = Integral::new(
            |s: C| (I * s * s, 2.0 * I * s),
            Contour::through([c(-reach, 0.0), below, c(reach, 0.0)]),
        )
        .amplitude(move |s: C| (s - p).inv())
        .pole(p);
        // exp(-z^2) is known as well as its exponent.
        let scale = w.norm() * (1.0 + 1e-4 * z.norm_sqr());
        tally.enter(&integral, k, -I / PI, (w, scale), &format!("z {z}"));
    }
    tally.check("w(z)", |_| 2e-12);
}

/// Rows of a cuspoid table: `x_K .. x_1` and the value.
fn cuspoids(text: &str, unfolding: usize) -> Vec<(Vec<f64>, C)> {
    let rows = text.lines().filter(|line| !line.starts_with('#')).skip(1);
    rows.map(|line| {
        let x: Vec<f64> = line.split(',').map_while(|x| x.parse().ok()).collect();
        (x[..unfolding].iter().rev().copied().collect(), c(x[unfolding], x[unfolding + 1]))
    })
    .collect()
}

#[test]
fn canonical_integrals_from_their_own_integrals() {
    // k^(1/(K+2)) integral of exp(i k (u^(K+2) + sum x_m k^(m/(K+2) - 1) u^m)) is Psi_K(x)
    // (DLMF 36.2.4, 36.6); tables of pearcey, swallowtail, butterfly.
    let tables = [
        ("Pearcey", 2, include_str!("data/pearcey_real.csv")),
        ("swallowtail", 3, include_str!("data/swallowtail.csv")),
        ("butterfly", 4, include_str!("data/butterfly.csv")),
    ];
    for (name, unfolding, text) in tables {
        let mut tally = Tally::default();
        let degree = unfolding + 2;
        for (n, (x, psi)) in cuspoids(text, unfolding).into_iter().enumerate().step_by(2) {
            let k: f64 = [10.0, 100.0, 3000.0][n / 2 % 3];
            let mut coefficients = vec![c(0.0, 0.0); degree + 1];
            coefficients[degree] = c(1.0, 0.0);
            let mut size = 1.0;
            for (m, x) in x.iter().enumerate() {
                let power = (m + 1) as f64 / degree as f64 - 1.0;
                coefficients[m + 1] = c(x * k.powf(power), 0.0);
                size += x.abs().powf(1.0 / (unfolding + 1 - m) as f64);
            }
            let reach = 2.0 * size / k.powf(1.0 / degree as f64);
            let end = C::from_polar(reach, FRAC_PI_2 / degree as f64);
            let start = if unfolding % 2 == 0 { -end } else { -end.conj() };
            let integral = Integral::new(
                Polynomial(coefficients),
                Contour::through([start, c(0.0, 0.0), end]),
            );
            let factor = c(k.powf(1.0 / degree as f64), 0.0);
            tally.enter(&integral, k, factor, (psi, psi.norm().max(0.1)), &format!("{x:?}"));
        }
        // Far out `k f` reaches 1e4 and its rounding sets the limit.
        tally.check(name, |_| 3e-12);
    }
}
