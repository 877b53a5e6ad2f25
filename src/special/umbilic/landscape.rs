//! The exponent of the one-dimensional integral, its saddles and its valleys.
//!
//! With `r = e^q` both umbilics are `integral of e^(H(q)) dq` (from DLMF 36.2.6, 36.2.8 with `u^2 = r`),
//!
//! ```text
//! H(q) = i (c_1 r + c_2 r^2 + c_3 r^3 + c_- / r) + q/2,   r = e^q,
//! ```
//!
//! real coefficients, `c_3 > 0`. In the plane of q nothing is singular, and the factor `1/sqrt(r)` is part of H: its
//! saddles stay apart from `r = 0` when `c_-` vanishes. Valleys: `Re q -> infinity` along `Im q = pi/6 + 2 pi n/3`,
//! and `Re q -> -infinity` along `Im q = -+pi/2 + 2 pi m` (for `c_- > 0`, `< 0`; anywhere for `c_- = 0`).
//! `H(q + 2 pi i) = H(q) + pi i`.
//!
//! The coefficients and H at a hub (a saddle, as near as a double comes) are double-double; everything else is
//! relative to the hub: with `E = e^(q - q_hub) - 1`, `k_j = i c_j r^j` and `k_- = i c_-/r` there,
//!
//! ```text
//! H - H_hub = (H'_hub - 1/2) E + (q - q_hub)/2 + (k_2 + 3 k_3 + k_-) E^2 + (k_3 - k_-/(1 + E)) E^3,
//! ```
//!
//! in which nothing cancels near the hub, however large the terms of H.

use super::super::double_double::{Dd, Precise, two_sum};
use super::super::panels::exponentials;
use num_complex::Complex64;
use std::f64::consts::{FRAC_PI_2, FRAC_PI_6, TAU};

/// Where a descent ends.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Valley {
    /// `r -> infinity` along `arg r = pi/6 + 2 pi n/3`.
    Outer(i32),
    /// `r -> 0` along `arg r = -+pi/2 + 2 pi m`.
    Inner(i32),
}

/// A rule's error follows the exponent a little beyond the piece.
const STRETCH: f64 = 1.1;
/// Derivatives of H that are used one by one.
const ORDERS: usize = 8;

/// The coefficients of H.
#[derive(Clone, Copy, Debug)]
pub(super) struct Landscape {
    /// `c_1, c_2, c_3`.
    pub(super) outer: [Dd; 3],
    /// `c_-`.
    pub(super) inner: Dd,
    /// The integrand is also wanted times `weight/r`; the logarithm of the weight.
    pub(super) ln_weight: f64,
}

/// A saddle of H and H round it.
#[derive(Clone, Copy)]
pub(super) struct Hub {
    pub(super) q: Complex64,
    pub(super) r: Complex64,
    /// `1/r`.
    pub(super) inverse: Precise,
    /// H.
    pub(super) level: Precise,
    /// The coefficients of `E`, `E^2` and, without `k_-`, `E^3` of the module's page. The sums in the first two
    /// may be far below their terms.
    pub(super) cubic: [Complex64; 3],
    /// `k_1, k_2, k_3, k_-`.
    pub(super) terms: [Complex64; 4],
    /// See [`Landscape`].
    ln_weight: f64,
}

/// H at the distance `offset` from a hub.
#[derive(Clone, Copy)]
pub(super) struct Site {
    pub(super) offset: Complex64,
    /// How far below the hub.
    pub(super) drop: f64,
    /// The same for the highest of the wanted integrands.
    pub(super) crest_drop: f64,
    /// The terms of H with `r`, `r^2`, `r^3`, `1/r`.
    terms: [Complex64; 4],
}

/// `j` of the terms.
const POWERS: [f64; 4] = [1.0, 2.0, 3.0, -1.0];

/// Below this the coefficient of 1/r counts as zero.
const NEGLIGIBLE: f64 = 1e-280;

const ZERO: Dd = Dd { hi: 0.0, lo: 0.0 };

pub(super) fn real(x: Dd) -> Precise {
    Precise { re: x, im: ZERO }
}

fn doubled(x: Dd, factor: f64) -> Dd {
    Dd { hi: factor * x.hi, lo: factor * x.lo }
}

impl Landscape {
    /// From the coefficients; an inner one that is next to nothing counts as zero.
    pub(super) fn new(outer: [Dd; 3], inner: Dd) -> Self {
        let inner = if inner.hi.abs() < NEGLIGIBLE { ZERO } else { inner };
        Landscape { outer, inner, ln_weight: f64::NEG_INFINITY }
    }

    /// The inverse of the least distance from r = 0 at which an outer term counts.
    pub(super) fn steepness(&self) -> f64 {
        let [c1, c2, c3] = self.outer.map(|c| c.hi.abs());
        c1.max(c2.sqrt()).max(c3.cbrt())
    }

    /// The integral with 1/r from those with 1, r, r^2, for small `c_-`: integration of
    /// `(e^H r^-n)'` gives `(n - 1/2) I_-n = i (c_1 I_(1-n) + 2 c_2 I_(2-n) + 3 c_3 I_(3-n) - c_- I_(-n-1))`,
    /// of which the last term is small.
    pub(super) fn over_r(&self, moments: &[Complex64; 3]) -> Complex64 {
        let [c1, c2, c3] = self.outer.map(|c| c.hi);
        // I_-5 .. I_2 in places 0 .. 7.
        let mut all = [Complex64::ZERO; 8];
        all[5..].copy_from_slice(moments);
        for _ in 0..5 {
            for n in 1..=4 {
                let at = 5 - n;
                let outer = all[at + 1] * c1 + all[at + 2] * (2.0 * c2) + all[at + 3] * (3.0 * c3);
                let sum = outer - all[at - 1] * self.inner.hi;
                all[at] = Complex64::new(-sum.im, sum.re) / (n as f64 - 0.5);
            }
        }
        all[4]
    }

    /// The saddles with `-pi < Im q <= pi`: roots r of `3 c_3 r^4 + 2 c_2 r^3 + c_1 r^2 - i half r - c_-`
    /// with `half` = 1/2, or 0 for those of H without q/2. They need not be exact.
    pub(super) fn saddles(&self, half: f64) -> ([Complex64; 4], usize) {
        let [c1, c2, c3] = self.outer.map(|c| c.hi);
        let real = |x: f64| Complex64::new(x, 0.0);
        let all = [
            real(-self.inner.hi),
            Complex64::new(0.0, -half),
            real(c1),
            real(2.0 * c2),
            real(3.0 * c3),
        ];
        roots(if self.inner.hi == 0.0 { &all[1..] } else { &all })
    }

    /// `c_1 r + c_2 r^2 + c_3 r^3 + c_- / r`.
    pub(super) fn phase(&self, r: Complex64) -> Complex64 {
        let [c1, c2, c3] = self.outer.map(|c| c.hi);
        ((r * c3 + c2) * r + c1) * r + self.inner.hi / r
    }

    /// Newton steps to a real zero of the derivative of [`Landscape::phase`].
    pub(super) fn polished(&self, start: f64) -> f64 {
        let ([c1, c2, c3], c) = (self.outer.map(|c| c.hi), self.inner.hi);
        let mut r = start;
        for _ in 0..2 {
            let value = (3.0 * c3 * r + 2.0 * c2) * r + c1 - c / (r * r);
            let slope = 6.0 * c3 * r + 2.0 * c2 + 2.0 * c / (r * r * r);
            let step = value / slope;
            if step.abs() < 1e-3 * r.abs() {
                r -= step;
            }
        }
        r
    }

    /// The hub at the point r.
    pub(super) fn hub(&self, r: Complex64) -> Hub {
        let [c1, c2, c3] = self.outer;
        let zero = real(ZERO);
        let powers = real(c3).times_plus(r, real(c2)).times_plus(r, real(c1)).times_plus(r, zero);
        // 3 c_3 with c_3 = 1 or 2, and 2 c_2, are exact.
        let bends = real(doubled(c3, 3.0)).times_plus(r, real(c2));
        let bends = bends.times_plus(r, zero).times_plus(r, zero);
        let slopes = real(doubled(c3, 3.0)).times_plus(r, real(doubled(c2, 2.0)));
        let slopes = slopes.times_plus(r, real(c1)).times_plus(r, zero);
        // 1/r and what it lacks.
        let inverse = r.inv();
        let lack = Precise::from(-inverse).times_plus(r, Precise::from(Complex64::ONE)).round();
        let rest = inverse * lack;
        let inverse =
            Precise { re: two_sum(inverse.re, rest.re), im: two_sum(inverse.im, rest.im) };
        let over = [inverse.re, inverse.im].map(|x| x.times(self.inner));
        let q = r.ln();
        let half = |x: f64| Dd { hi: 0.5 * x, lo: 0.0 };
        let terms = [c1, c2, c3].map(|c| c.hi);
        let ir = Complex64::new(-r.im, r.re);
        Hub {
            q,
            r,
            inverse,
            level: Precise {
                re: powers.im.plus(over[1]).minus().plus(half(q.re)),
                im: powers.re.plus(over[0]).plus(half(q.im)),
            },
            cubic: [
                // H' - 1/2, where H' is all but zero.
                Complex64::new(
                    -slopes.im.plus(over[1].minus()).hi,
                    slopes.re.plus(over[0].minus()).hi,
                ),
                Complex64::new(-bends.im.plus(over[1]).hi, bends.re.plus(over[0]).hi),
                ir * r * r * terms[2],
            ],
            terms: [
                ir * terms[0],
                ir * r * terms[1],
                ir * r * r * terms[2],
                Complex64::new(-over[1].hi, over[0].hi),
            ],
            ln_weight: self.ln_weight,
        }
    }
}

impl Hub {
    /// Re H.
    pub(super) fn height(&self) -> f64 {
        self.level.re.hi
    }

    /// The point at a distance.
    pub(super) fn site(&self, offset: Complex64) -> Site {
        let (mut re, mut im) = ([offset.re], [offset.im]);
        exponentials(&mut re, &mut im);
        let ratio = Complex64::new(re[0], im[0]);
        let (square, inverse) = (ratio * ratio, ratio.conj() / ratio.norm_sqr());
        let [k1, k2, k3, inner] = self.terms;
        let terms = [k1 * ratio, k2 * square, k3 * square * ratio, inner * inverse];
        let e = ratio - 1.0;
        let [first, second, third] = self.cubic;
        let change = e * (first + e * (second + e * (third - terms[3])));
        let drop = -(change.re + 0.5 * offset.re);
        let surplus = (self.ln_weight - self.q.re - offset.re).max(0.0);
        Site { offset, drop, crest_drop: drop - surplus, terms }
    }

    /// How far below the hub the points of a circle lie.
    pub(super) fn circle(&self, radius: f64) -> [f64; DIRECTIONS] {
        let mut re = COSINES.map(|c| c * radius);
        let offset = re;
        let mut im: [f64; DIRECTIONS] = std::array::from_fn(|k| radius * sine(k));
        exponentials(&mut re, &mut im);
        let [first, second, third] = self.cubic;
        let inner = self.terms[3];
        std::array::from_fn(|k| {
            let ratio = Complex64::new(re[k], im[k]);
            let e = ratio - 1.0;
            let over = inner * ratio.conj() / ratio.norm_sqr();
            -((e * (first + e * (second + e * (third - over)))).re + 0.5 * offset[k])
        })
    }

    /// The valley that surely lies straight ahead.
    pub(super) fn valley(&self, site: &Site) -> Option<Valley> {
        let [t1, t2, t3, inner] = site.terms;
        let angle = self.q.im + site.offset.im;
        if -3.0 * 0.98 * t3.re >= 2.0 * modulus(t2) + modulus(t1) + modulus(inner) + 0.5 {
            return Some(Valley::Outer(((angle - FRAC_PI_6) * 3.0 / TAU).round() as i32));
        }
        let outer = 3.0 * modulus(t3) + 2.0 * modulus(t2) + modulus(t1);
        if inner.re <= 0.0 && 0.5 - 0.98 * inner.re >= 1.02 * outer {
            // i c_-/r on the ray downhill has the sign of c_- in its direction.
            let [_, _, _, at_hub] = self.terms;
            let sign = (at_hub * self.r).im;
            if sign == 0.0 {
                return Some(Valley::Inner(0));
            }
            return Some(Valley::Inner(((angle + FRAC_PI_2.copysign(sign)) / TAU).round() as i32));
        }
        None
    }

    /// The hub as a site.
    pub(super) fn centre(&self) -> Site {
        let surplus = (self.ln_weight - self.q.re).max(0.0);
        Site { offset: Complex64::ZERO, drop: 0.0, crest_drop: -surplus, terms: self.terms }
    }
}

/// Directions looked at on a circle.
pub(super) const DIRECTIONS: usize = 32;

/// `cos(2 pi k/32)`, k = 0 .. 8, to 17 digits (elementary).
const QUARTER: [f64; 9] = [
    1.0,
    0.980_785_280_403_230_4,
    0.923_879_532_511_286_7,
    0.831_469_612_302_545_2,
    std::f64::consts::FRAC_1_SQRT_2,
    0.555_570_233_019_602_2,
    0.382_683_432_365_089_8,
    0.195_090_322_016_128_28,
    0.0,
];

const COSINES: [f64; DIRECTIONS] = {
    let mut out = [0.0; DIRECTIONS];
    let mut k = 0;
    while k < DIRECTIONS {
        let folded = if k > 16 { 32 - k } else { k };
        out[k] = if folded > 8 { -QUARTER[16 - folded] } else { QUARTER[folded] };
        k += 1;
    }
    out
};

fn sine(k: usize) -> f64 {
    COSINES[(k + 24) % DIRECTIONS]
}

/// The unit vector of a direction.
pub(super) fn direction(k: usize) -> Complex64 {
    Complex64::new(COSINES[k], sine(k))
}

impl Site {
    /// `H^(m)/m!`, m = 1 .. 8.
    fn taylor(&self) -> [Complex64; ORDERS] {
        let mut terms = self.terms;
        let mut factorial = 1.0;
        std::array::from_fn(|m| {
            for (term, j) in terms.iter_mut().zip(POWERS) {
                *term *= j;
            }
            factorial *= (m + 1) as f64;
            let sum = terms[0] + terms[1] + terms[2] + terms[3];
            (if m == 0 { sum + 0.5 } else { sum }) / factorial
        })
    }

    /// H'.
    pub(super) fn slope(&self) -> Complex64 {
        let [t1, t2, t3, inner] = self.terms;
        t1 + t2 * 2.0 + t3 * 3.0 - inner + 0.5
    }

    /// `H''/2`.
    pub(super) fn bend(&self) -> Complex64 {
        let [t1, t2, t3, inner] = self.terms;
        (t1 + t2 * 4.0 + t3 * 9.0 + inner) * 0.5
    }

    /// The moduli of the Taylor terms of the orders from `first` (1 or 3) on, at the distance `rho`, added up, and
    /// the derivative by `ln rho`; from above.
    fn spread(moduli: &[f64; ORDERS], sizes: &[f64; 4], first: usize, rho: f64) -> [f64; 2] {
        // sum over m > 8 of x^m/m!
        let tail = |x: f64| {
            let x3 = x * x * x;
            let factor = if x < 7.0 { 10.0 / (10.0 - x) } else { x.exp() };
            x3 * x3 * x3 / 362_880.0 * factor
        };
        let [one, two, three] = [tail(rho), tail(2.0 * rho), tail(3.0 * rho)];
        let rest = (sizes[0] + sizes[3]) * one + sizes[1] * two + sizes[2] * three;
        let (mut sum, mut growth) = (0.0, 0.0);
        for m in (first..=ORDERS).rev() {
            sum = sum * rho + moduli[m - 1];
            growth = growth * rho + m as f64 * moduli[m - 1];
        }
        let power = if first == 1 { rho } else { rho * rho * rho };
        [sum * power + rest, growth * power + 10.0 * rest]
    }

    /// The radius at which, stretched, the moduli of the Taylor terms add up to `target`, or a little
    /// less; at most 8.
    pub(super) fn reach(&self, target: f64) -> f64 {
        let moduli = self.taylor().map(modulus);
        let sizes = self.terms.map(modulus);
        let mut rho = (target / moduli[0]).min((target / moduli[1]).sqrt()).min(8.0);
        // Newton's method in the logarithms comes down from there.
        for _ in 0..40 {
            let [sum, growth] = Site::spread(&moduli, &sizes, 1, rho);
            let ratio = sum / target;
            if ratio <= 1.02 {
                break;
            }
            rho *= if ratio > 1e6 { 0.4 } else { (-ratio.ln() * sum / growth).exp() };
        }
        rho / STRETCH
    }

    /// The radius within which the quadratic term is at least twice all others together.
    pub(super) fn quadratic(&self) -> f64 {
        let moduli = self.taylor().map(modulus);
        let sizes = self.terms.map(modulus);
        let mut rho: f64 = 0.5;
        for _ in 0..60 {
            let [others, _] = Site::spread(&moduli, &sizes, 3, rho);
            if others + moduli[0] * rho <= 0.5 * moduli[1] * rho * rho {
                return rho;
            }
            rho *= 0.6;
        }
        0.0
    }
}

/// `|z|` where no square leaves the range.
#[inline]
fn modulus(z: Complex64) -> f64 {
    z.norm_sqr().sqrt()
}

/// All roots of a polynomial of degree up to 4 at once (Aberth's iteration), lowest coefficient first.
fn roots(coefficients: &[Complex64]) -> ([Complex64; 4], usize) {
    let n = coefficients.len() - 1;
    let lead = coefficients[n];
    // All roots lie within twice the largest of |a_j/a_n|^(1/(n-j)) (Fujiwara).
    let radius = (0..n)
        .map(|j| (coefficients[j] / lead).norm().powf(1.0 / (n - j) as f64))
        .fold(0.0, f64::max);
    let mut roots = [Complex64::ZERO; 4];
    for (k, root) in roots[..n].iter_mut().enumerate() {
        *root = Complex64::from_polar(radius, 0.4 + TAU * k as f64 / n as f64);
    }
    for _ in 0..60 {
        let mut moved = 0.0f64;
        for k in 0..n {
            let at = roots[k];
            let (mut value, mut slope) = (lead, Complex64::ZERO);
            for a in coefficients[..n].iter().rev() {
                slope = slope * at + value;
                value = value * at + a;
            }
            let repulsion: Complex64 =
                (0..n).filter(|j| *j != k && roots[*j] != at).map(|j| 1.0 / (at - roots[j])).sum();
            let step = value / (slope - value * repulsion);
            if step.re.is_finite() && step.im.is_finite() {
                roots[k] -= step;
                moved = moved.max(step.norm_sqr() / roots[k].norm_sqr());
            }
        }
        if moved < 1e-14 {
            break;
        }
    }
    (roots, n)
}
