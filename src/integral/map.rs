//! A change of variable, for phases that a map settles.
//!
//! Method. `z = m(t)` turns `g(z) exp(i k f(z)) dz` into `g(m(t)) m'(t) exp(i k f(m(t))) dt`, an integral of the
//! same kind. It is for phases that are bounded at infinity, where no descent ends: a rational phase with a
//! pole at `p` by `z = p + 1/t` (infinity becomes `t = 0`, where `g dz` may have a pole to be named), an end
//! at a bounded value by a map that brings it to a finite point (`z = atanh t`).
//!
//! Source: textbook (change of variable; chain rule by [`Jet`]).

use super::{Amplitude, Contour, Integral, Jet, Phase};
use num_complex::Complex64;
use std::f64::consts::TAU;

/// The phase `f(m(t))`.
#[derive(Clone, Debug)]
pub struct MappedPhase<P, M> {
    phase: P,
    map: M,
}

/// Where `z` is infinite and `f(m(t))` is not, `f` is taken from a circle of this radius.
const RADIUS: f64 = 0.001;
const NODES: u32 = 8;

impl<P: Phase, M: Fn(Jet) -> Jet> MappedPhase<P, M> {
    /// `f` and its derivatives at a removable singularity: the first Taylor coefficients by Cauchy's
    /// formula.
    fn removed(&self, t: Complex64) -> [Complex64; 3] {
        let mut sums = [Complex64::new(0.0, 0.0); 3];
        for node in 0..NODES {
            let turn = Complex64::from_polar(1.0, TAU * f64::from(node) / f64::from(NODES));
            let z = (self.map)(Jet::variable(t + turn * RADIUS));
            let mut term = self.phase.value(z.value) / f64::from(NODES);
            for sum in &mut sums {
                *sum += term;
                term *= turn.conj() / RADIUS;
            }
        }
        [sums[0], sums[1], sums[2] * 2.0]
    }
}

fn finite(z: Complex64) -> bool {
    z.re.is_finite() && z.im.is_finite()
}

impl<P: Phase, M: Fn(Jet) -> Jet> Phase for MappedPhase<P, M> {
    fn value_and_derivative(&self, t: Complex64) -> (Complex64, Complex64) {
        let z = (self.map)(Jet::variable(t));
        let (f, slope) = self.phase.value_and_derivative(z.value);
        if finite(f) && finite(slope * z.first) {
            return (f, slope * z.first);
        }
        let [f, slope, _] = self.removed(t);
        (f, slope)
    }

    fn jet(&self, t: Complex64) -> [Complex64; 3] {
        let z = (self.map)(Jet::variable(t));
        let [value, first, second] = self.phase.jet(z.value);
        let f = z.through(value, first, second);
        let jet = [f.value, f.first, f.second];
        if jet.into_iter().all(finite) { jet } else { self.removed(t) }
    }

    fn noise_scale(&self, t: Complex64) -> f64 {
        let scale = self.phase.noise_scale((self.map)(Jet::variable(t)).value);
        if scale.is_finite() { scale } else { self.removed(t)[0].norm() }
    }
}

/// The amplitude `g(m(t)) m'(t)`.
#[derive(Clone, Debug)]
pub struct MappedAmplitude<A, M> {
    amplitude: A,
    map: M,
}

impl<A: Amplitude, M: Fn(Jet) -> Jet> Amplitude for MappedAmplitude<A, M> {
    fn value(&self, t: Complex64) -> Complex64 {
        let z = (self.map)(Jet::variable(t));
        self.amplitude.value(z.value) * z.first
    }
}

impl<P: Phase, A: Amplitude> Integral<P, A> {
    /// The same integral over `t`, `z = map(t)`, along the contour's image in the plane of `t`, which the caller
    /// gives: `map` must carry it into the homotopy class of the contour in `z`.
    ///
    /// Where `z` is infinite but `f` is not (`t = 0` of `z = p + 1/t`), `f` is taken from a circle of radius 0.001 in
    /// `t`: measure `t` in units of the contour's size.
    ///
    /// Plans and quadrature then know nothing of `z`. Poles are to be named anew, at their `t`; powers at
    /// ends likewise. A map that turns an end into an algebraic one has a singular `m'`: write `g m'` without
    /// the power yourself and build the integral from that.
    ///
    /// ```
    /// use merging_saddles::integral::Jet;
    /// use merging_saddles::{Complex64 as C, Contour, Integral};
    /// use num_traits::Inv;
    /// use std::f64::consts::PI;
    /// // f = -i z/(1 + z^2) is bounded at infinity. Twice round its pole i, with z = i + 1/t.
    /// let pole = C::new(0.0, 1.0);
    /// let f = |z: Jet| z * C::new(0.0, -1.0) / (z * z + 1.0);
    /// let round = |r: f64| (0..8).map(move |n| C::from_polar(r, 2.0 * PI * f64::from(n) / 8.0));
    /// let direct = Integral::new(
    ///     merging_saddles::integral::Formula(f),
    ///     Contour::closed(round(0.8).map(|d| pole + d)),
    /// );
    /// let mapped = direct.clone().mapped(
    ///     move |t: Jet| t.inv() + pole,
    ///     Contour::closed(round(1.25).map(|d| d.conj())),
    /// );
    /// let (one, two) = (direct.quadrature(3.0, 1e-12)?, mapped.quadrature(3.0, 1e-12)?);
    /// assert!((one.value - two.value).norm() <= one.error + two.error);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn mapped<M: Fn(Jet) -> Jet + Clone>(
        self,
        map: M,
        contour: Contour,
    ) -> Integral<MappedPhase<P, M>, MappedAmplitude<A, M>> {
        let amplitude = MappedAmplitude { amplitude: self.amplitude, map: map.clone() };
        Integral::new(MappedPhase { phase: self.phase, map }, contour).amplitude(amplitude)
    }
}
