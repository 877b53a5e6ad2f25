//! A plan whose values bring their gradient along.
//!
//! Method. `dI/dx_j = i k A_j + B_j`, `A_j` and `B_j` integrals over the phase and the contour of `I` with the
//! amplitudes `(df/dx_j) g` and `dg/dx_j`. Saddles, groups, normal forms, rings, topology and certificate do
//! not depend on the amplitude: they are those of the plan for `I`, and only the coefficients of the
//! expansions are made anew (`expansion/layers.rs`). At a wavenumber the canonical integrals are computed
//! once for all amplitudes; each takes its own number of orders and its own ring, by its own error
//! figure.
//!
//! Source: differentiation under the integral sign (textbook); the expansions as in the plan.

use super::plan::{AlgebraicEnd, End, LowEnd, Node, Place, Plan, Shared, below, finish};
use crate::estimate::FieldGradient;
use crate::expansion::{Contribution, Layer, Layers, Pole, Series};
use crate::integral::{Amplitude, Gradient, MovingEnd, ParameterDerivatives, Phase};
use crate::{Error, Scaled};
use num_complex::Complex64;
use std::ops::RangeBounds;

/// A [`Plan`] that gives, with the value of an integral, its derivatives in `N` parameters. Made by
/// [`Gradient::plan`]; calls of [`GradientPlan::at`] allocate nothing.
pub struct GradientPlan<const N: usize> {
    field: Plan,
    /// For `(df/dx_j) g`, followed by `dg/dx_j` where the amplitude depends on the parameters.
    layers: Vec<Plan>,
    ends: Vec<MovingEnd<N>>,
    /// The size of each layer's amplitude over that of the field.
    ratios: Vec<f64>,
}

impl<const N: usize, P, A, F, G> Gradient<'_, N, P, A, F, G>
where
    P: Phase,
    A: Amplitude,
    F: ParameterDerivatives<N>,
    G: ParameterDerivatives<N>,
{
    /// Plans the integral and its derivatives.
    ///
    /// Cost: the plan of the integral ([`Integral::plan`](crate::Integral::plan)) and, for all parameters
    /// together, 128 values of each closure on every ring: a quarter of that plan to the whole of it for one or two
    /// parameters of the phase, up to twice where the amplitude depends on both.
    ///
    /// # Errors
    /// As [`Integral::plan`](crate::Integral::plan); a pole of order three or more in `dg/dx_j`; an end that
    /// moves although it is not finite or has a power; derivatives that are not finite on the contour.
    ///
    /// # A field, its flux and the direction of its beam
    ///
    /// ```
    /// use merging_saddles::{Complex64 as C, Contour, Integral};
    /// use std::f64::consts::PI;
    /// // The field of a cusp caustic, u(x, y) = integral of exp(i k (z^4 + y z^2 + x z)) dz: Pearcey's
    /// // function (DLMF 36.2.4) with x_2 = k^(1/2) y and x_1 = k^(3/4) x.
    /// let (x, y, k) = (0.8, -0.5, 400.0);
    /// let cusp = Integral::new(
    ///     move |z: C| {
    ///         let square = z * z;
    ///         (square * square + square * y + z * x, square * z * 4.0 + z * (2.0 * y) + x)
    ///     },
    ///     Contour::through([C::from_polar(3.0, -7.0 * PI / 8.0), C::from_polar(3.0, PI / 8.0)]),
    /// );
    /// let gradient = cusp.gradient(|z: C| [z, z * z]); // df/dx, df/dy
    /// let plan = gradient.plan()?;
    /// let u = plan.at(k)?;
    /// let intensity = u.value.value.norm_sqr();
    /// let [along_x, along_y] = u.flux(); // Im(conj(u) du/dx), Im(conj(u) du/dy)
    /// let beam_rad = along_y.atan2(along_x); // the direction of the beam
    ///
    /// // Outside the caustic 27 x^2 = -8 y^3 (DLMF 36.4.5) one ray arrives, from the real saddle z of f,
    /// // and the wave vector is k grad f = k (z, z^2) up to O(1/k) (common practice).
    /// let mut z = -0.7f64;
    /// for _ in 0..9 {
    ///     z -= (4.0 * z.powi(3) + 2.0 * y * z + x) / (12.0 * z * z + 2.0 * y);
    /// }
    /// assert!((beam_rad - (z * z).atan2(z)).abs() < 1e-4);
    /// assert!((u.local_wave_vector()[0] / k - z).abs() < 1e-4);
    ///
    /// // The yardstick gives the same gradient.
    /// let check = gradient.quadrature(k, 1e-12)?;
    /// for (flux, exact) in u.flux().into_iter().zip(check.flux()) {
    ///     assert!((flux - exact).abs() < 1e-10 * k * intensity);
    /// }
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn plan(&self) -> Result<GradientPlan<N>, Error> {
        self.gradient_of(self.integral().plan()?)
    }

    /// The same for the wavenumbers of a range, as [`Integral::plan_for`](crate::Integral::plan_for).
    ///
    /// # Errors
    /// As [`Gradient::plan`] and [`Integral::plan_for`](crate::Integral::plan_for).
    pub fn plan_for(&self, range: impl RangeBounds<f64>) -> Result<GradientPlan<N>, Error> {
        self.gradient_of(self.integral().plan_for(range)?)
    }

    fn gradient_of(&self, field: Plan) -> Result<GradientPlan<N>, Error> {
        self.check()?;
        let ends = self.moving_ends()?;
        let fill = |z: Complex64, values: &mut [Complex64]| self.fill(z, values);
        let layers = field.with_amplitudes(self.integral().phase(), self.amplitudes(), &fill)?;
        let ratios = layers.iter().map(|layer| layer.size_over(&field)).collect();
        Ok(GradientPlan { field, layers, ends, ratios })
    }
}

impl Plan {
    /// The same plan for each of several amplitudes, whose values `fill` writes.
    fn with_amplitudes(
        &self,
        phase: &dyn Phase,
        count: usize,
        fill: &dyn Fn(Complex64, &mut [Complex64]),
    ) -> Result<Vec<Plan>, Error> {
        let poles = |index| -> Result<Vec<Pole>, Error> {
            let layer = Layer { index, count, fill };
            let measure = |old: &Pole| {
                let mut pole = Pole::measure(phase, &layer, old.z, old.radius)?;
                pole.crossings = old.crossings;
                Ok(pole)
            };
            self.poles.iter().map(measure).collect()
        };
        let layers =
            Layers { count, fill, poles: (0..count).map(poles).collect::<Result<_, Error>>()? };
        let mut plans: Vec<Plan> = (0..count)
            .map(|n| Plan {
                nodes: Vec::with_capacity(self.nodes.len()),
                roots: self.roots.clone(),
                ends: Vec::new(),
                low_ends: Vec::new(),
                algebraic: Vec::new(),
                poles: layers.poles[n].clone(),
                saddles: Vec::with_capacity(self.saddles.len()),
                floor: self.floor,
            })
            .collect();
        let several =
            |series: &Option<Series>| spread(series, count, |s| s.with_amplitudes(&layers));
        for node in &self.nodes {
            for (plan, series) in plans.iter_mut().zip(several(&node.series)) {
                let &Node { parts, settled, members, .. } = node;
                plan.nodes.push(Node { series, parts, settled, members });
            }
        }
        for end in &self.ends {
            for (plan, own) in plans.iter_mut().zip(several(&end.own)) {
                let seen = |near: &crate::expansion::NearEnd| {
                    let rings = self.nodes[near.node].series.as_ref()?.rings().len();
                    let series = plan.nodes[near.node].series.as_ref()?;
                    Some(near.for_series(series, rings))
                };
                let near = end.near.iter().filter_map(seen).collect();
                plan.ends.push(End { at: end.at, sign: end.sign, own, near });
            }
        }
        for end in &self.algebraic {
            for (plan, own) in
                plans.iter_mut().zip(spread(&end.own, count, |s| s.with_amplitudes(&layers)))
            {
                plan.algebraic.push(AlgebraicEnd { own, near: Vec::with_capacity(end.near.len()) });
            }
            for (node, series) in &end.near {
                for (plan, series) in plans.iter_mut().zip(series.with_amplitudes(&layers)) {
                    let last = plan.algebraic.last_mut().expect("it was pushed above");
                    last.near.push((*node, series));
                }
            }
        }
        let mut values = vec![Complex64::new(0.0, 0.0); count];
        for &LowEnd { z, height, slope, bend, .. } in &self.low_ends {
            fill(z, &mut values);
            for (plan, g) in plans.iter_mut().zip(&values) {
                plan.low_ends.push(LowEnd { z, height, weight: g.norm(), slope, bend });
            }
        }
        for &Place { z, exponent, spread, together, .. } in &self.saddles {
            fill(z, &mut values);
            for (plan, &g) in plans.iter_mut().zip(&values) {
                plan.saddles.push(Place { z, exponent, weight: g.norm(), spread, together });
            }
        }
        Ok(plans)
    }

    /// The largest ratio of the amplitude's size to that of another plan on the same rings.
    fn size_over(&self, other: &Plan) -> f64 {
        let series = |plan: &'_ Plan| -> Vec<Option<f64>> {
            let nodes = plan.nodes.iter().map(|node| node.series.as_ref());
            let ends = plan.ends.iter().map(|end| end.own.as_ref());
            nodes.chain(ends).map(|series| series?.size()).collect()
        };
        let pairs = series(self).into_iter().zip(series(other));
        let ratios = pairs.filter_map(|(own, other)| Some(own? / other.filter(|&s| s > 0.0)?));
        ratios.fold(0.0, f64::max)
    }
}

/// A series for each layer, or none for all.
fn spread<S, T>(series: &Option<S>, count: usize, make: impl Fn(&S) -> Vec<T>) -> Vec<Option<T>> {
    match series {
        Some(series) => make(series).into_iter().map(Some).collect(),
        None => (0..count).map(|_| None).collect(),
    }
}

impl<const N: usize> GradientPlan<N> {
    /// The plan of the integral alone.
    pub fn field(&self) -> &Plan {
        &self.field
    }

    /// The integral and its derivatives at wavenumber `k`, each with its error figure.
    ///
    /// A derivative that vanishes, as across a line of symmetry, comes with an error figure above its
    /// value. Cost: about one [`Plan::at`] for the value and one for each parameter (two where the
    /// amplitude depends on it), less what the canonical integrals cost.
    ///
    /// # Errors
    /// As [`Plan::at`]: if `k` is not a finite number above zero, or for one of the derivatives no digit is
    /// certain on the scale of the field and of the others.
    pub fn at(&self, k: f64) -> Result<FieldGradient<N>, Error> {
        self.at_orders(k, usize::MAX)
    }

    /// The same with at most `orders` orders of each expansion.
    ///
    /// # Errors
    /// As [`GradientPlan::at`], and if `orders` is zero.
    pub fn at_orders(&self, k: f64, orders: usize) -> Result<FieldGradient<N>, Error> {
        Plan::check(k, orders)?;
        let mut shared = Shared::new();
        let (value, form) = self.field.total(k, orders, Some(&mut shared));
        let ik = Complex64::new(0.0, k);
        let derivatives: [Contribution; N] = std::array::from_fn(|j| {
            let (first, _) = self.layers[j].total(k, orders, Some(&mut shared));
            let mut sum = first.times(ik);
            if let Some(layer) = self.layers.get(N + j) {
                sum = sum.and(&layer.total(k, orders, Some(&mut shared)).0);
            }
            for end in &self.ends {
                let (value, error) = end.at(j, k);
                sum = sum.and(&Contribution { value, size: value.norm(), error, orders: 0 });
            }
            sum
        });
        // What a derivative may be for the size of the field, and the other way round.
        let ratio = |j: usize| k * self.ratios[j] + self.ratios.get(N + j).copied().unwrap_or(0.0);
        let mut scale = value.size;
        for (j, derivative) in derivatives.iter().enumerate() {
            if ratio(j) > 0.0 {
                scale = larger(scale, derivative.size * ratio(j).recip());
            }
        }
        let value = finish(&value, scale, form, k)?;
        let mut gradient = [value; N];
        for (j, (slot, derivative)) in gradient.iter_mut().zip(&derivatives).enumerate() {
            *slot = finish(derivative, larger(derivative.size, scale * ratio(j)), form, k)?;
        }
        Ok(FieldGradient { value, gradient })
    }
}

fn larger(a: Scaled, b: Scaled) -> Scaled {
    if below(a, b) { b } else { a }
}
