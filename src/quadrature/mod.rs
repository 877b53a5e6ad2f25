//! The yardstick: the integral itself, by quadrature on the contour flowed downhill.
//!
//! No saddle is located and no asymptotic formula is used. The contour descends on `|exp(i k f)|`
//! within its homotopy class (`flow`) until nothing of it lies higher than it must, and is then
//! integrated by adaptive Gauss panels (`panels`), while the amplitude is watched for poles that
//! must not be crossed (`residue`). Every other method of the crate can be checked
//! against it, point by point, by the person who uses it.

mod flow;
mod gradient;
mod named;
mod panels;
mod residue;
mod rule;
mod terrain;
mod unrolled;

use crate::integral::{Amplitude, Integral, Phase};
use crate::{Error, Estimate, Form, Scaled};
use flow::Flow;
use num_complex::Complex64;
use panels::Quadrature;
use terrain::Sampler;

/// Deepenings of the floor, should the amplitude grow into the valleys.
const ROUNDS: usize = 12;

impl<P: Phase, A: Amplitude> Integral<P, A> {
    /// `I(k) = integral over C of g(z) exp(i k f(z)) dz` by quadrature on the contour flowed
    /// downhill: the yardstick that everything else can be checked against.
    ///
    /// `tolerance` is relative to `|I(k)|` (it is brought into 2.2e-16 .. 0.1). Where rounding
    /// allows less, as for a phase that is only known to `k` times 2.2e-16, or at a zero of
    /// `I(k)`, the value comes all the same and its error figure says what was reached.
    ///
    /// The contour counts by its homotopy class: it is never led across a pole or branch point of
    /// `f` or `g`, nor across a branch cut of the caller's closures, since these are all it can
    /// see. A [`Downhill`](crate::integral::Termination::Downhill) end runs from its point by
    /// steepest descent of `|exp(i k f)|` to where that vanishes: at infinity, or in a singularity
    /// of `f`. A [`Finite`](crate::integral::Termination::Finite) end stays; an integrable
    /// singularity of `g` there is allowed.
    ///
    /// # Errors
    ///
    /// [`Error::Domain`]: `k` or `tolerance` not a finite number above zero, or a contour of
    /// fewer than two points. [`Error::NotFinite`]: NaN or infinity from the phase or the
    /// amplitude on the contour. [`Error::NoDigits`]: `k |f|` beyond 1e15. [`Error::Undecided`]:
    /// an end without a way down, a contour across a branch cut, or a derivative that is not that
    /// of the value, or an amplitude that is not analytic. [`Error::NoConvergence`]: more than a
    /// million evaluations for the descent, more than 40,000 panels, or an integrand that decays
    /// too slowly.
    ///
    /// # Accuracy and cost
    ///
    /// Relative error 5e-16 (median), growing to `k` times the rounding error of `f`. The error
    /// figure was above the error at all of some 4,800 table values (cuspoids between all valleys,
    /// Airy, Faddeeva and Bessel functions, random polynomial phases; k from 1e-3 to 1e7,
    /// tolerances from 1e-2 to 1e-13) and at the median 3 to 80 times the error.
    ///
    /// Some 300 to 1000 evaluations of the phase, flat in `k` (20 to 100 microseconds for
    /// elementary functions); up to 10,000 where the contour hangs on a pole, and some hundred per
    /// unit of `k` where it must lean on a branch cut: turn the cuts of the closures away from the
    /// descent. Detours over a ridge into a valley and back are cut off, as far as they are found; if
    /// one is left, its crossings cancel and the figure says how many digits that takes.
    ///
    /// A pole of `g` is seen if its residue is above some 1e-3 `tolerance` (and 1e-11) times `g`
    /// times the size of the region that the contour sweeps; weaker ones may be passed unnoticed, unless
    /// they were named by [`Integral::pole`].
    ///
    /// ```
    /// use merging_saddles::{Complex64 as C, Contour, Integral};
    /// use std::f64::consts::PI;
    /// // Ai(x) = (1/2 pi) Int exp(i (t^3/3 + x t)) dt (DLMF 9.5.4), at x = 0:
    /// // Ai(0) = 0.355028053887817239 (DLMF 9.2.3).
    /// let contour = Contour::through([C::from_polar(2.0, PI * 5.0 / 6.0), C::from_polar(2.0, PI / 6.0)]);
    /// let airy = Integral::new(|t: C| (t * t * t / 3.0, t * t), contour);
    /// let u = airy.quadrature(1.0, 1e-13)?;
    /// assert!((u.value.re / (2.0 * PI) - 0.355028053887817239).abs() < 1e-15);
    /// assert!(u.relative_error < 1e-13);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    ///
    /// Method: the module's files `flow` and `panels`; steepest descent as in DLMF 2.4(iv),
    /// Gauss-Legendre panels (DLMF 3.5(v)).
    pub fn quadrature(&self, k: f64, tolerance: f64) -> Result<Estimate, Error> {
        Error::require_positive("k", k)?;
        Error::require_positive("tolerance", tolerance)?;
        self.contour().check()?;
        self.check_powers()?;
        let tolerance = tolerance.clamp(f64::EPSILON, 0.1);
        if self.is_algebraic() {
            return self.unrolled(k).on_flowed_contour(k, tolerance);
        }
        self.on_flowed_contour(k, tolerance)
    }

    /// The integral of an integrand without algebraic ends.
    fn on_flowed_contour(&self, k: f64, tolerance: f64) -> Result<Estimate, Error> {
        let sampler = Sampler::new(self);
        // Residues that are smaller than this against the amplitude are not looked for.
        let fraction = (1e-3 * tolerance).clamp(1e-12, 1e-6);
        for strict in [false, true] {
            let mut flow = Flow::new(&sampler, self.contour(), k, strict)?;
            let estimate = self.flowed(&sampler, &mut flow, k, tolerance)?;
            let image = flow.image();
            if flow.keeps_class(self.contour(), &image, fraction) {
                return self.with_named_poles(estimate, &sampler, &image, k);
            }
        }
        Err(Error::Undecided {
            reason: "between the contour and the saddles the amplitude is not analytic, in a way \
                     too weak to be located"
                .to_owned(),
            remedy: "lead the contour near the saddles yourself, or ask for fewer digits",
        })
    }

    /// Adds the residues of the poles named that lie between the contour and its image.
    fn with_named_poles(
        &self,
        estimate: Estimate,
        sampler: &Sampler<'_, P, A>,
        image: &[Complex64],
        k: f64,
    ) -> Result<Estimate, Error> {
        let mut sum = estimate;
        for &p in self.poles() {
            let turns = named::turns(self.contour().points(), image, p);
            if turns != 0 {
                let others = self.poles().iter().map(|other| (other - p).norm());
                let points = self.contour().points();
                let size = points.iter().map(|z| (z - points[0]).norm()).fold(0.0, f64::max);
                let room = others.filter(|&d| d > 0.0).fold(0.01 * size, f64::min);
                let (value, error) = named::residue(sampler, p, k, 0.5 * room)?;
                let form = Form::Quadrature { evaluations: sampler.count() - evaluations(&sum) };
                let turns = Complex64::new(f64::from(turns), 0.0);
                sum = sum + Estimate::new(value * turns, error * turns.norm(), 0, form);
            }
        }
        Ok(sum)
    }

    /// The integral on the flowed contour, followed as deep as it takes.
    fn flowed(
        &self,
        sampler: &Sampler<'_, P, A>,
        flow: &mut Flow<'_, P, A>,
        k: f64,
        tolerance: f64,
    ) -> Result<Estimate, Error> {
        let mut depth = 6.0 - tolerance.ln();
        let mut last: Option<(f64, f64)> = None;
        for _ in 0..ROUNDS {
            flow.relax(depth)?;
            let flowed = flow.contour(depth)?;
            let Some(summit) = flowed
                .pieces
                .iter()
                .flat_map(|(a, b)| [a, b])
                .max_by(|a, b| a.h.re.total_cmp(&b.h.re))
            else {
                break;
            };
            let digits = -(k * f64::EPSILON * sampler.noise_scale(summit.z)).log10();
            if digits < 0.5 {
                return Err(Error::NoDigits {
                    what: "the quadrature",
                    value: Complex64::new(k, 0.0),
                    digits,
                    remedy: "take a smaller k, or move a constant out of the phase",
                });
            }
            let quadrature = Quadrature { sampler, k, h0: summit.h, floor: flowed.floor };
            let sum = quadrature.over(&flowed.pieces, tolerance)?;
            let left_out = sum.left_out
                + flowed.sunk.iter().map(|c| quadrature.left_out(c)).sum::<f64>()
                + flowed.tails.iter().map(|s| quadrature.tail(s)).sum::<f64>();
            let goal = (tolerance * sum.value.norm()).max(f64::EPSILON * sum.size);
            if left_out > 0.25 * goal {
                // What is left out falls with the depth, exponentially at a rate of at most 1.
                let rate = match last {
                    Some((above, before)) => (before / left_out).ln() / (depth - above),
                    None => 1.0,
                };
                last = Some((depth, left_out));
                let wanted = (4.0 * left_out / goal).ln() + 1.0;
                depth += (wanted / rate.clamp(0.01, 1.0)).min(4.0 * depth);
                continue;
            }
            let reference = reference_factor(k, summit.h);
            let error = sum.defect + sum.noise + left_out;
            let scale = Scaled::exp(Complex64::new(reference.0.re, 0.0));
            return Ok(Estimate::new(
                Scaled::exp(reference.0) * (sum.value * (1.0 + reference.1)),
                scale * error,
                0,
                Form::Quadrature { evaluations: sampler.count() },
            ));
        }
        Err(Error::NoConvergence {
            what: "the depth to which the integrand was followed",
            limit: ROUNDS,
            remedy: "it decays too slowly towards the ends: take a larger k, or put a growing \
                     exponential of the amplitude into the phase",
        })
    }
}

fn evaluations(estimate: &Estimate) -> usize {
    match estimate.form {
        Form::Quadrature { evaluations } => evaluations,
        _ => 0,
    }
}

/// `k h` as the rounded product and the rest that rounding left.
fn reference_factor(k: f64, h: Complex64) -> (Complex64, Complex64) {
    let product = h * k;
    let rest = Complex64::new(k.mul_add(h.re, -product.re), k.mul_add(h.im, -product.im));
    (product, rest)
}
