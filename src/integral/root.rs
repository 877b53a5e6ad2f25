//! A square-root branch point of the phase or the amplitude, removed before anything else.
//!
//! Method. With `z = z_b + w^2` everything that is a function of `z` and `sqrt(z - z_b)` is a
//! function of `w` alone, single-valued and analytic at `w = 0`. The contour is carried over with
//! the root nearest to the previous one. A contour that begins or ends at `z_b` begins or ends at
//! `w = 0`, a finite end like any other.
//!
//! Regions. Everywhere; the pieces of the contour are cut so that `w` turns by no more than a
//! small angle about the origin on each.
//!
//! Source: textbook (uniformisation of a square root).

use super::{Amplitude, Contour, Integral, Jet, Phase};
use crate::Error;
use num_complex::Complex64;

/// The greatest turn of the root on one piece of a contour, in radians.
const TURN: f64 = 0.2;
/// A contour must not pass the branch point closer than this part of the piece that passes it.
const CLOSEST: f64 = 1e-9;

/// A phase written as one formula over `z` and `sqrt(z - z_b)`; a function of the root `w`.
#[derive(Clone, Debug)]
pub struct RootPhase<F> {
    at: Complex64,
    formula: F,
}

impl<F: Fn(Jet, Jet) -> Jet> RootPhase<F> {
    fn along(&self, w: Complex64) -> Jet {
        let root = Jet::variable(w);
        (self.formula)(root * root + self.at, root)
    }
}

impl<F: Fn(Jet, Jet) -> Jet> Phase for RootPhase<F> {
    fn value_and_derivative(&self, w: Complex64) -> (Complex64, Complex64) {
        let f = self.along(w);
        (f.value, f.first)
    }

    fn jet(&self, w: Complex64) -> [Complex64; 3] {
        let f = self.along(w);
        [f.value, f.first, f.second]
    }
}

/// An amplitude given as a function of `z` and `sqrt(z - z_b)`; a function of the root `w` with the
/// factor `dz/dw = 2 w` in it.
#[derive(Clone, Debug)]
pub struct RootAmplitude<G> {
    at: Complex64,
    formula: G,
}

impl<G: Fn(Complex64, Complex64) -> Complex64> Amplitude for RootAmplitude<G> {
    fn value(&self, w: Complex64) -> Complex64 {
        (self.formula)(w * w + self.at, w) * w * 2.0
    }
}

/// An amplitude given with the factor `2 sqrt(z - z_b)` already in it.
#[derive(Clone, Debug)]
pub struct OverRoot<G>(RootAmplitude<G>);

impl<G: Fn(Complex64, Complex64) -> Complex64> Amplitude for OverRoot<G> {
    fn value(&self, w: Complex64) -> Complex64 {
        (self.0.formula)(w * w + self.0.at, w) * 2.0
    }
}

impl<F, G> Integral<RootPhase<F>, RootAmplitude<G>>
where
    F: Fn(Jet, Jet) -> Jet,
    G: Fn(Complex64, Complex64) -> Complex64,
{
    /// An integral whose phase and amplitude have a square-root branch point at `z_b`, both given as
    /// functions `f(z, root)`, `g(z, root)` of `z` and `root = sqrt(z - z_b)`.
    ///
    /// The root is continued along the contour, so no branch cut is in the way. At the first point
    /// (the second, if the contour begins at `z_b`) it has its principal value; for the other sheet
    /// write `-root` in the formulas. `f` is one formula over [`Jet`], from which the derivatives come.
    ///
    /// The integral that comes back is one over the variable `root`: its contour, its phase's
    /// argument and the places given to [`Integral::pole`] are values of the root. Plans and
    /// quadrature know nothing of the branch point any more. Where `f` is smooth in `z`, `root = 0` is
    /// a saddle of it, which the factor `d z = 2 root d root` weakens.
    ///
    /// # Errors
    /// If the contour is malformed, or passes through `z_b` other than at its ends.
    ///
    /// ```
    /// use merging_saddles::{Complex64 as C, Contour, Integral, integral::Jet};
    /// // Integral_0^inf sqrt(z) exp(-k z) dz = Gamma(3/2) k^(-3/2) = sqrt(pi)/2 at k = 1 (DLMF 5.9.1).
    /// let zero = C::new(0.0, 0.0);
    /// let integral = Integral::with_root(
    ///     zero,
    ///     |z: Jet, _| z * C::new(0.0, 1.0),
    ///     |_, root| root,
    ///     Contour::starting_at([zero, C::new(3.0, 0.0)]),
    /// )?;
    /// let u = integral.plan()?.at(1.0)?;
    /// assert!((u.value.re - std::f64::consts::PI.sqrt() / 2.0).abs() < 1e-13);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn with_root(z_b: Complex64, f: F, g: G, contour: Contour) -> Result<Self, Error> {
        let contour = lifted(&contour, z_b)?;
        let phase = RootPhase { at: z_b, formula: f };
        Ok(Integral::new(phase, contour).amplitude(RootAmplitude { at: z_b, formula: g }))
    }
}

impl<F, G> Integral<RootPhase<F>, OverRoot<G>>
where
    F: Fn(Jet, Jet) -> Jet,
    G: Fn(Complex64, Complex64) -> Complex64,
{
    /// The same for an amplitude `g(z, root)/root`: the root in the denominator cancels against
    /// `d z = 2 root d root`, so that `root = 0` is harmless.
    ///
    /// # Errors
    /// As [`Integral::with_root`].
    ///
    /// ```
    /// use merging_saddles::{Complex64 as C, Contour, Integral, integral::Jet};
    /// // Integral_0^inf z^(-1/2) exp(-k z) dz = sqrt(pi/k) (DLMF 5.9.1).
    /// let zero = C::new(0.0, 0.0);
    /// let integral = Integral::over_root(
    ///     zero,
    ///     |z: Jet, _| z * C::new(0.0, 1.0),
    ///     |_, _| C::new(1.0, 0.0),
    ///     Contour::starting_at([zero, C::new(3.0, 0.0)]),
    /// )?;
    /// let u = integral.plan()?.at(4.0)?;
    /// assert!((u.value.re - (std::f64::consts::PI / 4.0).sqrt()).abs() < 1e-13);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn over_root(z_b: Complex64, f: F, g: G, contour: Contour) -> Result<Self, Error> {
        let contour = lifted(&contour, z_b)?;
        let phase = RootPhase { at: z_b, formula: f };
        let amplitude = OverRoot(RootAmplitude { at: z_b, formula: g });
        Ok(Integral::new(phase, contour).amplitude(amplitude))
    }
}

/// The contour in the plane of `w = sqrt(z - z_b)`.
fn lifted(contour: &Contour, z_b: Complex64) -> Result<Contour, Error> {
    contour.check()?;
    if !(z_b.re.is_finite() && z_b.im.is_finite()) {
        let remedy = "name a finite place";
        return Err(Error::Domain { what: "branch point", value: z_b, remedy });
    }
    let points = contour.points();
    let last = points.len() - 1;
    let zero = Complex64::new(0.0, 0.0);
    let mut root = (points[0] - z_b).sqrt();
    let mut list = vec![root];
    for (n, side) in points.windows(2).enumerate() {
        let (from, to) = (side[0] - z_b, side[1] - z_b);
        if from == zero {
            // Straight away from the branch point (only at the start: else it has been refused).
            root = to.sqrt();
            list.push(root);
            continue;
        }
        if to == zero && n + 1 == last && !contour.is_closed() {
            list.push(zero);
            break;
        }
        let step = to - from;
        let nearest = (-(from / step).re).clamp(0.0, 1.0);
        if (from + step * nearest).norm() <= CLOSEST * step.norm() {
            return Err(Error::Domain {
                what: "branch point on the contour: z_b",
                value: z_b,
                remedy: "lead the contour round it on the side that is meant",
            });
        }
        // At the angle a past the nearest point of the whole line, at the distance d from z_b, the
        // line is at d tan(a): equal turns of the root are equal steps of a.
        let turn = (to / from).arg();
        let pieces = (0.5 * turn.abs() / TURN).ceil().max(1.0);
        let across = (from * step.conj()).im / step.norm_sqr();
        let begin = (from / step).re;
        for piece in 1..=pieces as usize {
            let here = if piece as f64 == pieces {
                to
            } else {
                let angle = (begin / across).atan() - turn * (piece as f64 / pieces);
                from + step * (across * angle.tan() - begin)
            };
            let next = here.sqrt();
            root = if (next - root).norm() <= (next + root).norm() { next } else { -next };
            list.push(root);
        }
    }
    if contour.is_closed() && (list[0] + root).norm() < (list[0] - root).norm() {
        return Err(Error::Domain {
            what: "closed contour that winds an odd number of times round the branch point z_b",
            value: z_b,
            remedy: "close it after a second turn, or cut it open",
        });
    }
    if contour.is_closed() {
        let last = list.len() - 1;
        list[last] = list[0];
    }
    Ok(Contour::new(list, contour.start(), contour.end()))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::integral::Termination;

    fn c(re: f64, im: f64) -> Complex64 {
        Complex64::new(re, im)
    }

    #[test]
    fn the_root_is_continuous_and_squares_back() {
        let z_b = c(0.3, -0.2);
        let around: Vec<Complex64> =
            (0..=26).map(|n| z_b + Complex64::from_polar(1.0, 0.5 * f64::from(n))).collect();
        let mut contours = vec![Contour::between(around)];
        for d in [1.0, 1e-3, 1e-7, -1e-7, -0.4] {
            contours.push(Contour::through([c(-2.0, -0.2 + d), c(3.0, -0.2 + 3.0 * d)]));
            contours.push(Contour::through([c(0.3 + d, 4.0), c(0.3 + d, -1.0)]));
        }
        for contour in contours {
            let lift = lifted(&contour, z_b).expect("a contour");
            let (z, w) = (contour.points(), lift.points());
            let squares = [(w[0], z[0]), (w[w.len() - 1], z[z.len() - 1])];
            assert!(squares.iter().all(|(w, z)| (w * w + z_b - z).norm() < 1e-14));
            for pair in w.windows(2) {
                assert!((pair[1] / pair[0]).arg().abs() < 1.01 * TURN, "{pair:?}");
                // Every point lies on the polyline.
                let on = z.windows(2).any(|s| {
                    let t = (pair[1] * pair[1] + z_b - s[0]) / (s[1] - s[0]);
                    t.im.abs() < 1e-13 && t.re > -1e-13 && t.re < 1.0 + 1e-13
                });
                assert!(on, "{pair:?}");
            }
        }
        // 13 rad round z_b: the root has turned by 6.5.
        let list: Vec<Complex64> =
            (0..=26).map(|n| Complex64::from_polar(1.0, 0.5 * f64::from(n))).collect();
        let lift = lifted(&Contour::between(list), c(0.0, 0.0)).expect("a contour");
        let end = lift.points()[lift.points().len() - 1];
        assert!((end - Complex64::from_polar(1.0, 6.5)).norm() < 1e-14);
        assert_eq!(lift.start(), Termination::Finite);
    }

    #[test]
    fn through_the_branch_point_is_refused() {
        let contour = Contour::through([c(-1.0, 0.0), c(1.0, 0.0)]);
        assert!(matches!(lifted(&contour, c(0.0, 0.0)), Err(Error::Domain { .. })));
        assert!(lifted(&contour, c(f64::NAN, 0.0)).is_err());
        let once = Contour::closed([c(1.0, 0.0), c(0.0, 1.0), c(-1.0, -1.0)]);
        assert!(lifted(&once, c(0.0, 0.0)).is_err());
    }
}
