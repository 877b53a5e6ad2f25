//! Heights over the plane: the exponent `h = i f` at points, and what it does along a chord.
//!
//! A chord is trusted ("resolved") when the change of `h` along it agrees with the Euler-Maclaurin
//! trapezoidal rule for `h'` with its first correction (DLMF 2.10.1) to 1 %. Between resolved
//! chords nothing of `h` can hide: a pole, a branch cut or a jump of the caller's closure spoils
//! the agreement.

use crate::integral::{Amplitude, Integral, Phase};
use num_complex::Complex64;
use std::cell::Cell;

/// A point with the exponent and two derivatives.
#[derive(Clone, Copy, Debug)]
pub(super) struct Site {
    pub z: Complex64,
    /// `i f`.
    pub h: Complex64,
    pub slope: Complex64,
    pub bend: Complex64,
}

impl Site {
    /// How far below this point the nearest saddle may lie: right up to a factor of order one for
    /// a saddle of any order. The other end of a resolved chord tells more of the curvature, since
    /// `h''` may vanish by chance.
    pub fn gain(&self, other: &Site) -> f64 {
        let slope = self.slope.norm_sqr();
        let secant = (other.slope - self.slope).norm() / (other.z - self.z).norm();
        let bend = if secant.is_finite() { self.bend.norm().max(secant) } else { self.bend.norm() };
        if slope == 0.0 { 0.0 } else { 0.5 * slope / bend }
    }
}

/// The integrand, counting its evaluations.
pub(super) struct Sampler<'a, P, A> {
    integral: &'a Integral<P, A>,
    count: Cell<usize>,
}

fn finite(z: Complex64) -> bool {
    z.re.is_finite() && z.im.is_finite()
}

const I: Complex64 = Complex64::new(0.0, 1.0);

impl<'a, P: Phase, A: Amplitude> Sampler<'a, P, A> {
    pub fn new(integral: &'a Integral<P, A>) -> Self {
        Sampler { integral, count: Cell::new(0) }
    }

    /// Evaluations of the phase so far.
    pub fn count(&self) -> usize {
        self.count.get()
    }

    /// The exponent with derivatives; `None` where it is not finite.
    pub fn site(&self, z: Complex64) -> Option<Site> {
        self.count.set(self.count.get() + 1);
        let [f, df, ddf] = self.integral.phase().jet(z);
        let site = Site { z, h: I * f, slope: I * df, bend: I * ddf };
        (finite(site.h) && finite(site.slope) && finite(site.bend)).then_some(site)
    }

    /// `i f(z)` alone.
    pub fn exponent(&self, z: Complex64) -> Option<Complex64> {
        self.count.set(self.count.get() + 1);
        let h = I * self.integral.phase().value(z);
        finite(h).then_some(h)
    }

    /// Whether a chord is shorter than twice its distance from every pole that was named.
    pub fn clear_of_poles(&self, a: Complex64, b: Complex64) -> bool {
        self.integral.poles().iter().all(|p| {
            let along = ((p - a) / (b - a)).re.clamp(0.0, 1.0);
            let distance = (a + (b - a) * along - p).norm();
            // Places that are no numbers are clear of everything.
            distance.is_nan() || (b - a).norm() <= 2.0 * distance
        })
    }

    /// `g(z)`.
    pub fn amplitude(&self, z: Complex64) -> Option<Complex64> {
        let g = self.integral.amplitude_at(z);
        finite(g).then_some(g)
    }

    pub fn noise_scale(&self, z: Complex64) -> f64 {
        self.count.set(self.count.get() + 1);
        self.integral.phase().noise_scale(z)
    }
}

/// What the height `Re h` does along a straight chord, from data at its two ends.
#[derive(Clone, Copy, Debug)]
pub(super) struct Profile {
    /// The highest point of the cubic through heights and slopes.
    pub top: f64,
    /// Where it is: 0 at the first end, 1 at the second.
    pub at: f64,
    /// How far the cubic may be from the truth.
    pub margin: f64,
    /// Whether the data at the two ends describe the chord.
    pub resolved: bool,
}

impl Profile {
    pub fn of(a: &Site, b: &Site, k: f64) -> Profile {
        let dz = b.z - a.z;
        let rise = b.h - a.h;
        let (da, db) = (a.slope * dz, b.slope * dz);
        let (ca, cb) = (a.bend * dz * dz, b.bend * dz * dz);
        let defect = (rise - (da + db) * 0.5 + (cb - ca) / 12.0).norm();
        let scale = da.norm().max(db.norm());
        let noise = 64.0 * f64::EPSILON * (a.h.norm() + b.h.norm());
        // The cubic's second derivatives against the true ones: its error is a sixteenth of the
        // fourth-order coefficient, which is half the difference.
        let miss_a = (rise * 6.0 - da * 4.0 - db * 2.0 - ca).norm();
        let miss_b = (da * 2.0 + db * 4.0 - rise * 6.0 - cb).norm();
        let (top, at) = cubic_top(a.h.re, b.h.re, da.re, db.re);
        Profile {
            top,
            at,
            margin: (miss_a + miss_b) / 32.0,
            // At a saddle of high order no chord, however short, passes the relative test.
            resolved: defect <= 0.01 * scale + noise || k * scale.max(rise.norm()) < 1e-12,
        }
    }
}

/// The maximum over [0, 1] of the cubic with the given end values and slopes, and its place.
fn cubic_top(p0: f64, p1: f64, d0: f64, d1: f64) -> (f64, f64) {
    let rise = p1 - p0;
    let (c2, c3) = (3.0 * rise - 2.0 * d0 - d1, d0 + d1 - 2.0 * rise);
    let mut best = if p0 >= p1 { (p0, 0.0) } else { (p1, 1.0) };
    let root = (c2 * c2 - 3.0 * c3 * d0).sqrt();
    if root.is_nan() {
        return best;
    }
    // Roots of d0 + 2 c2 t + 3 c3 t^2 without cancellation.
    let q = -(c2 + c2.signum() * root);
    for t in [q / (3.0 * c3), d0 / q] {
        if t > 0.0 && t < 1.0 {
            let p = p0 + t * (d0 + t * (c2 + t * c3));
            if p > best.0 {
                best = (p, t);
            }
        }
    }
    best
}
