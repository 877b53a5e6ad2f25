//! The coefficients of a uniform expansion, order by order.
//!
//! Method. `G_0(u) = g(z(u)) z'(u)` is divided by `Phi'`: `G_n = p^(n) + Phi' H_n`. Integration by
//! parts leaves `G_(n+1) = -H_n'/i` (the factor `1/k` of each order is kept out), so that
//!
//! `I(k) ~ exp(i k A) sum_n k^(-n) sum_j p_j^(n) C_j`, `C_j = integral of u^j exp(i k Phi) du`.
//!
//! At an end point (K = -1, `Phi = u`) the moments `integral_0^(i inf) u^n exp(i k u) du =
//! n! (i/k)^(n+1)` give `p^(n) = n! i^n g_n` with `C_0 = i/k` (Watson's lemma, DLMF 2.3(ii)); at a
//! single saddle (K = 0) the recursion gives `p^(n) = (1/2)_n i^n g_2n` at once.
//!
//! The same recursion with a fixed pseudo-random function of unit mean square on the ring in place of
//! `G_0` measures how much of the rounding noise each order passes on.
//!
//! Source: N. Bleistein, Comm. Pure Appl. Math. 19 (1966) 353.

use super::division::{Term, Twin, divide_terms};
use super::{
    Coefficients, I, KEPT, MAX_SADDLES, NormalForm, POINTS, Values, ZERO, evaluate, foreseen_tail,
    tail, taylor, to_coefficients, to_values, unit_points,
};
use crate::integral::Amplitude;
use num_complex::Complex64;
use std::sync::OnceLock;

/// Orders that are computed.
pub const MAX_ORDERS: usize = 14;

/// The coefficients `p_j^(n)` on one ring, with what their error figure needs.
#[derive(Clone, Debug)]
pub struct Orders {
    saddles: usize,
    /// `p[n][j]`.
    p: [[Complex64; MAX_SADDLES]; MAX_ORDERS],
    /// The same recursion applied to unit noise on the ring, absolute values.
    noise: [[f64; MAX_SADDLES]; MAX_ORDERS],
}

/// Taylor coefficients of noise of unit root mean square on the ring, all of one size; the same for every
/// ring.
pub(super) fn unit_noise() -> &'static Coefficients {
    static ONCE: OnceLock<Coefficients> = OnceLock::new();
    ONCE.get_or_init(|| {
        // Weyl's sequence with the golden ratio: equidistributed angles.
        std::array::from_fn(|n| {
            let square = (n * n + 7 * n) as f64;
            Complex64::from_polar(
                (POINTS as f64).sqrt().recip(),
                2.0 * std::f64::consts::PI * (square * 0.618_033_988_749_895).fract(),
            )
        })
    })
}

/// `G_0(u) = g(z(u)) z'(u)` on a ring.
#[derive(Clone, Debug)]
pub struct Start {
    coefficients: Coefficients,
    size: f64,
    tail: f64,
    folded: f64,
    missing: f64,
}

impl Start {
    /// Samples the amplitude on the ring of a normal form. None if it is not finite there.
    pub fn new(form: &NormalForm, amplitude: &dyn Amplitude) -> Option<Start> {
        Start::without(form, amplitude, |_| ZERO)
    }

    /// The same with a function of `u` taken away: the principal parts of poles.
    pub(crate) fn without(
        form: &NormalForm,
        amplitude: &dyn Amplitude,
        part: impl Fn(Complex64) -> Complex64,
    ) -> Option<Start> {
        let mut values = to_values(&form.map_derivative());
        let points = to_values(form.map());
        for (value, &z) in values.iter_mut().zip(&points) {
            *value *= amplitude.value(z);
        }
        Start::of_values(form, values, part)
    }

    /// Several amplitudes sampled together: `fill` writes their values at a point, `part` is what is
    /// taken away from each. None for those that are not finite.
    pub(crate) fn several(
        form: &NormalForm,
        count: usize,
        fill: impl Fn(Complex64, &mut [Complex64]),
        part: impl Fn(usize, Complex64) -> Complex64,
    ) -> Vec<Option<Start>> {
        let slopes = to_values(&form.map_derivative());
        let mut values = vec![[ZERO; POINTS]; count];
        let mut here = vec![ZERO; count];
        for (s, (z, slope)) in to_values(form.map()).into_iter().zip(slopes).enumerate() {
            fill(z, &mut here);
            for (values, g) in values.iter_mut().zip(&here) {
                values[s] = g * slope;
            }
        }
        let layers = values.into_iter().enumerate();
        layers.map(|(n, values)| Start::of_values(form, values, |u| part(n, u))).collect()
    }

    /// From `g z'` on the ring.
    fn of_values(
        form: &NormalForm,
        mut values: Values,
        part: impl Fn(Complex64) -> Complex64,
    ) -> Option<Start> {
        let mut size = 0.0f64;
        for (value, &v) in values.iter_mut().zip(unit_points()) {
            // The noise is that of the whole, which is large where a pole lies near the ring.
            let square = value.norm_sqr();
            if !square.is_finite() {
                return None;
            }
            size = size.max(square);
            *value -= part(v * form.radius());
        }
        to_coefficients(&mut values);
        // Where poles have been taken away little may be left: the noise is that of the whole.
        let size = size.sqrt();
        Some(Start::measured(&values, size))
    }

    /// `H_n` at a point `v` of the disc.
    pub(crate) fn boundary(&self, form: &NormalForm, v: Complex64) -> [Complex64; MAX_ORDERS] {
        let mut terms = [ZERO; MAX_ORDERS];
        by_parts(form, &self.coefficients, |n, _, quotient| terms[n] = evaluate(quotient, v));
        let mut turn = Complex64::new(1.0, 0.0);
        for term in &mut terms {
            *term *= turn;
            turn *= I;
        }
        terms
    }

    /// What cannot be sampled: no figure can be trusted.
    pub(crate) fn unknown() -> Start {
        Start {
            coefficients: [ZERO; KEPT],
            size: 1.0,
            tail: f64::INFINITY,
            folded: f64::INFINITY,
            missing: f64::INFINITY,
        }
    }

    /// The same on a ring smaller by `factor`: nothing new has to be sampled.
    pub(crate) fn shrunk(&self, factor: f64) -> Start {
        let mut full = [ZERO; POINTS];
        let mut power = 1.0;
        for (scaled, c) in full.iter_mut().zip(&self.coefficients) {
            *scaled = c * power;
            power *= factor;
        }
        Start::measured(&full, self.size)
    }

    fn measured(full: &Values, size: f64) -> Start {
        let largest = |from: usize, to: usize| {
            full[from..to].iter().fold(0.0f64, |m, c| m.max(c.norm_sqr())).sqrt()
        };
        // An amplitude that vanishes is known to all digits.
        let scale = largest(0, KEPT).max(0.1 * size).max(f64::MIN_POSITIVE);
        let (before, last) = (largest(KEPT / 2, KEPT * 3 / 4), largest(KEPT * 3 / 4, KEPT));
        // By what the coefficients fall over a quarter of the kept half.
        let fall = if before > last { last / before } else { 1.0 };
        // Beyond the kept half come the next powers first, negative ones in the end.
        let folded = largest(POINTS * 3 / 4, POINTS) + last * fall.powi(5);
        let missing = largest(KEPT, POINTS * 3 / 4).max(last * fall);
        Start {
            coefficients: taylor(full),
            size,
            tail: if size > 0.0 { tail(full, 0, 0.1 * size) } else { 0.0 },
            folded: folded / scale,
            missing: missing / scale,
        }
    }

    /// How far the coefficients have not decayed; near 1 with a pole inside the ring.
    pub fn tail(&self) -> f64 {
        self.tail
    }

    /// What the tail will be on a ring larger by `factor`, as far as can be seen.
    pub(crate) fn foreseen_tail(&self, factor: f64) -> f64 {
        foreseen_tail(&self.coefficients, 0, factor)
    }

    /// What the transform adds to the kept coefficients, relative to the largest: the negative powers (all
    /// of them if there is a singularity inside), and the powers from [`POINTS`] on.
    pub(crate) fn folded(&self) -> f64 {
        self.folded
    }

    /// The first coefficients that are not kept, relative to the largest.
    pub(crate) fn missing(&self) -> f64 {
        self.missing
    }

    /// `max |G_0|` on the ring.
    pub(crate) fn size(&self) -> f64 {
        self.size
    }
}

impl Orders {
    /// All orders on the ring of a normal form.
    pub fn new(form: &NormalForm, start: &Start) -> Orders {
        let (p, noise) = recursion(form, &start.coefficients);
        Orders { saddles: form.saddles(), p, noise }
    }

    /// `H_n` at a point `v` of the disc, and the same for unit noise (absolute values): what an end
    /// point there adds to each order.
    pub(crate) fn boundary(
        &self,
        form: &NormalForm,
        start: &Start,
        v: Complex64,
    ) -> ([Complex64; MAX_ORDERS], [f64; MAX_ORDERS]) {
        let mut noise = [0.0; MAX_ORDERS];
        by_parts(form, unit_noise(), |n, _, quotient| noise[n] = evaluate(quotient, v).norm());
        (start.boundary(form, v), noise)
    }

    /// `p_j^(n)`, `j = 0..=K`, of order `n`.
    pub fn coefficients(&self, n: usize) -> &[Complex64] {
        &self.p[n][..self.saddles.max(1)]
    }

    /// The same for unit noise on the ring.
    pub(crate) fn noise(&self, n: usize) -> &[f64] {
        &self.noise[n][..self.saddles.max(1)]
    }
}

/// `p_j^(n)` for a start, and their absolute values for unit noise.
fn recursion(
    form: &NormalForm,
    start: &Coefficients,
) -> ([[Complex64; MAX_SADDLES]; MAX_ORDERS], [[f64; MAX_SADDLES]; MAX_ORDERS]) {
    let radius = form.radius();
    let unit = unit_noise();
    let mut p = [[ZERO; MAX_SADDLES]; MAX_ORDERS];
    let mut noise = [[0.0; MAX_SADDLES]; MAX_ORDERS];
    // With one saddle or none the recursion has a closed form: the moments of one power.
    if form.saddles() < 2 {
        let mut factor = Complex64::new(1.0, 0.0);
        let mut size = 1.0;
        for (n, (p, noise)) in p.iter_mut().zip(&mut noise).enumerate() {
            let (at, next) = match form.saddles() {
                0 => (n, (n + 1) as f64 / radius),
                _ => (2 * n, (n as f64 + 0.5) / (radius * radius)),
            };
            p[0] = start[at] * factor;
            noise[0] = unit[at].norm() * size;
            factor *= I * next;
            size *= next;
        }
        return (p, noise);
    }
    // The factor i of each order.
    let mut turn = Complex64::new(1.0, 0.0);
    let both = std::array::from_fn(|n| Twin::new(start[n], unit[n]));
    by_parts(form, &both, |n, remainder, _| {
        let mut power = 1.0;
        for ((p, noise), twin) in p[n].iter_mut().zip(&mut noise[n]).zip(remainder) {
            *p = twin.get(0) * turn * power;
            *noise = twin.get(1).norm() * power;
            power /= radius;
        }
        turn *= I;
    });
    (p, noise)
}

/// Repeated division and differentiation; `take(n, remainder, quotient)` gets each order, without
/// its factor `i^n`.
fn by_parts<T: Term>(
    form: &NormalForm,
    start: &[T; KEPT],
    mut take: impl FnMut(usize, &[T], &[T]),
) {
    let saddles = form.saddles();
    let divisor = form.derivative();
    let mut g = *start;
    let mut length = KEPT;
    let inverse = form.radius().recip();
    for n in 0..MAX_ORDERS {
        if length <= saddles {
            break;
        }
        divide_terms(&mut g[..length], &divisor[..=saddles]);
        take(n, &g[..saddles], &g[saddles..length]);
        // G_(n+1) = i dH/du, the i left out.
        length -= saddles + 1;
        for n in 0..length {
            g[n] = g[n + saddles + 1].scaled((n + 1) as f64 * inverse);
        }
    }
}

const _: () = assert!(2 * MAX_ORDERS <= KEPT && KEPT * 2 == POINTS);
