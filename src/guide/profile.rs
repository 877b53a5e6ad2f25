//! The width of a guide against range as the caller has it, and its smooth form round a cut-off.
//!
//! The uniform field needs the profile at *complex* widths and ranges. So round each cut-off the width is fitted as a
//! polynomial of the range, `D(s) = d_0 + d_1 (s - s_c) + .. + d_6 (s - s_c)^6`, by least squares at 64 places of the
//! caller's profile (Chebyshev nodes in range, DLMF 18.3). The lowest degree (1 to 6) is taken that leaves less than
//! 0.001 of a transition length. The width is what is smooth: the range as a function of the width has branch points
//! where the profile turns, and a polynomial of the width is worth nothing beyond them. The window reaches three
//! transition heights of width to both sides, as far as the profile goes and falls at 0.3 to 3.3 times its rate at
//! cut-off, but not beyond 0.6 of the width at cut-off. Fields keep the profile itself in everything that needs no
//! continuation.
//!
//! Samples are joined by monotone cubics (F. N. Fritsch, J. Butland, SIAM J. Sci. Stat. Comput. 5
//! (1984) 300, cited from memory). Source of the fit: least squares, common practice.

use crate::{Complex64, Error};
use std::f64::consts::PI;
use std::fmt;
use std::sync::Arc;

type Function = Arc<dyn Fn(f64) -> (f64, f64) + Send + Sync>;

/// Width of a guide against range: the depth of water along a track, the half width of a taper, the
/// half width of a well against time. In the units of the guide that it is used with.
#[derive(Clone)]
pub struct Profile {
    shape: Shape,
    from: f64,
    to: f64,
}

#[derive(Clone)]
enum Shape {
    Plane { width: f64, fall: f64 },
    Samples { range: Vec<f64>, width: Vec<f64>, gradient: Vec<f64> },
    Function(Function),
}

impl fmt::Debug for Profile {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        let shape = match &self.shape {
            Shape::Plane { width, fall } => format!("plane, {width} at 0, falling {fall}"),
            Shape::Samples { range, .. } => format!("{} samples", range.len()),
            Shape::Function(_) => "function".into(),
        };
        write!(out, "Profile({shape}, {} to {})", self.from, self.to)
    }
}

impl Profile {
    /// A straight profile: the width at range 0 and what it loses per unit of range. It goes from minus
    /// infinity to where the width is zero.
    ///
    /// Errors: [`Error::Domain`] for figures that are not finite and above zero.
    pub fn plane(width: f64, fall: f64) -> Result<Self, Error> {
        Error::require_positive("width at range 0", width)?;
        Error::require_positive("width lost per range", fall)?;
        let shape = Shape::Plane { width, fall };
        Ok(Profile { shape, from: f64::NEG_INFINITY, to: width / fall })
    }

    /// From samples: ranges that rise and the widths there.
    ///
    /// Errors: [`Error::Domain`] for fewer than three samples or lists of different length, ranges
    /// that do not rise, widths that are not finite and above zero.
    ///
    /// ```
    /// use merging_saddles::guide::Profile;
    /// let track = Profile::from_samples(&[0.0, 500.0, 1500.0], &[90.0, 80.0, 40.0])?;
    /// assert_eq!(track.width(500.0), 80.0); // a sample is kept
    /// assert!(track.fall(1000.0) > 0.02);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn from_samples(ranges: &[f64], widths: &[f64]) -> Result<Self, Error> {
        if ranges.len() < 3 || ranges.len() != widths.len() {
            let remedy = "give three or more ranges, and one width for each";
            return Err(Error::domain("number of samples", widths.len() as f64, remedy));
        }
        for (i, (&range, &width)) in ranges.iter().zip(widths).enumerate() {
            Error::require_finite("range of a sample", range)?;
            Error::require_positive("width of a sample", width)?;
            if i > 0 && range <= ranges[i - 1] {
                let remedy = "sort the samples by range, each range once";
                return Err(Error::domain("range of a sample", range, remedy));
            }
        }
        let gradient = monotone_gradients(ranges, widths);
        let shape = Shape::Samples { range: ranges.into(), width: widths.into(), gradient };
        Ok(Profile { shape, from: ranges[0], to: ranges[ranges.len() - 1] })
    }

    /// From a function that returns the width and its derivative with respect to range.
    ///
    /// Errors: [`Error::Domain`] for ranges that are not finite and rising. What the function
    /// returns is checked where it is used.
    ///
    /// ```
    /// use merging_saddles::guide::Profile;
    /// let bay = Profile::from_fn(0.0, 2000.0, |s| {
    ///     let slope = -0.03 * (1.0 + s / 4000.0);
    ///     (100.0 - 0.03 * s * (1.0 + s / 8000.0), slope)
    /// })?;
    /// assert!((bay.fall(2000.0) - 0.045).abs() < 1e-15); // by definition
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn from_fn(
        from: f64,
        to: f64,
        function: impl Fn(f64) -> (f64, f64) + Send + Sync + 'static,
    ) -> Result<Self, Error> {
        Error::require_finite("first range", from)?;
        Error::require_finite("last range", to)?;
        if from >= to {
            return Err(Error::domain("last range", to, "give a range beyond the first"));
        }
        Ok(Profile { shape: Shape::Function(Arc::new(function)), from, to })
    }

    /// First and last range.
    pub fn ranges(&self) -> [f64; 2] {
        [self.from, self.to]
    }

    /// Width at a range; beyond the ends that of the end.
    pub fn width(&self, range: f64) -> f64 {
        self.at(range).0
    }

    /// Width lost per unit of range; zero beyond the ends.
    pub fn fall(&self, range: f64) -> f64 {
        if range < self.from || range > self.to { 0.0 } else { -self.at(range).1 }
    }

    fn at(&self, range: f64) -> (f64, f64) {
        let s = range.clamp(self.from, self.to);
        match &self.shape {
            Shape::Plane { width, fall } => (width - fall * s, -fall),
            Shape::Function(function) => function(s),
            Shape::Samples { range, width, gradient } => {
                let right = range.partition_point(|&r| r <= s).clamp(1, range.len() - 1);
                let left = right - 1;
                let step = range[right] - range[left];
                let u = (s - range[left]) / step;
                let [d0, d1] = [width[left], width[right]];
                let [g0, g1] = [gradient[left] * step, gradient[right] * step];
                // Cubic Hermite interpolation.
                let (c2, c3) = (3.0 * (d1 - d0) - 2.0 * g0 - g1, 2.0 * (d0 - d1) + g0 + g1);
                (d0 + u * (g0 + u * (c2 + u * c3)), (g0 + u * (2.0 * c2 + u * 3.0 * c3)) / step)
            }
        }
    }

    /// The first range at which the width has fallen to a value.
    ///
    /// Found among 2000 equal steps, so a neck narrower than that may be missed.
    ///
    /// Errors: [`Error::Domain`] where the profile is not finite; [`Error::Undecided`] where the guide is
    /// narrower from the start on, or never gets so narrow.
    ///
    /// ```
    /// use merging_saddles::guide::Profile;
    /// // (80 - 23)/0.03 on a straight profile, by definition.
    /// let range = Profile::plane(80.0, 0.03)?.first_range_of_width(23.0)?;
    /// assert!((range - 1900.0).abs() < 1e-9);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn first_range_of_width(&self, width: f64) -> Result<f64, Error> {
        Error::require_positive("width", width)?;
        if let Shape::Plane { width: first, fall } = self.shape {
            return Ok((first - width) / fall);
        }
        let excess = |s: f64| -> Result<f64, Error> {
            let w = self.width(s);
            Error::require_finite("width of the profile", w)?;
            Ok(w - width)
        };
        if excess(self.from)? <= 0.0 {
            return Err(Error::Undecided {
                reason: format!(
                    "the guide is narrower than {width} at range {} already",
                    self.from
                ),
                remedy: "begin where it is wider, or take a lower mode",
            });
        }
        const STEPS: u32 = 2000;
        let step = (self.to - self.from) / f64::from(STEPS);
        let mut low = self.from;
        for j in 1..=STEPS {
            let mut high = if j == STEPS { self.to } else { self.from + step * f64::from(j) };
            if excess(high)? > 0.0 {
                low = high;
                continue;
            }
            for _ in 0..60 {
                let middle = 0.5 * (low + high);
                if excess(middle)? > 0.0 { low = middle } else { high = middle }
            }
            return Ok(0.5 * (low + high));
        }
        Err(Error::Undecided {
            reason: format!("the guide stays wider than {width} up to range {}", self.to),
            remedy: "look farther along, or take a higher mode",
        })
    }

    /// The fit of the width against range, round the range where it falls to `width`;
    /// `reach` is the width to both sides, `fine` the departure in range that is as good as none.
    pub(super) fn fit(&self, width: f64, reach: f64, fine: f64) -> Result<LocalFit, Error> {
        let centre = self.first_range_of_width(width)?;
        if let Shape::Plane { fall, .. } = self.shape {
            let window = [f64::NEG_INFINITY, f64::INFINITY];
            return Ok(LocalFit {
                centre,
                coefficients: vec![width, -fall],
                residual: 0.0,
                window,
            });
        }
        let reach = reach.min(0.6 * width);
        let [from, to] = [-1.0, 1.0].map(|side| self.edge(centre, width, reach, side));
        let [above, below] = [self.width(from) - width, width - self.width(to)];
        let least = 0.15 * reach;
        if !(above > least && below > least) {
            return Err(Error::Undecided {
                reason: format!(
                    "round its cut-off at range {centre} the guide narrows from {} to {} only, before it \
                     ends or widens; {} to {} is needed",
                    self.width(from),
                    self.width(to),
                    width + least,
                    width - least
                ),
                remedy: "give a profile that goes on falling through the cut-off",
            });
        }
        const PLACES: u32 = 64;
        let half = (to - centre).max(centre - from);
        let places: Vec<(f64, f64)> = (0..PLACES)
            .map(|j| {
                let x = (PI * (f64::from(j) + 0.5) / f64::from(PLACES)).cos();
                let s = 0.5 * (from + to) + 0.5 * (to - from) * x;
                ((s - centre) / half, self.width(s))
            })
            .collect();
        let mut best = None;
        for degree in 1..=6 {
            let Some(c) = least_squares(&places, degree) else { break };
            let value = |x: f64| c.iter().rev().fold(0.0, |sum, c| sum * x + c);
            // In range.
            let departure =
                |&(x, d): &(f64, f64)| (value(x) - d).abs() / self.fall(centre + half * x).abs();
            let residual = places.iter().map(departure).fold(0.0, f64::max);
            best = Some((c, residual));
            if residual < fine {
                break;
            }
        }
        let Some((mut coefficients, residual)) = best else {
            return Err(Error::domain("width of the profile", f64::NAN, "return finite widths"));
        };
        for (j, c) in coefficients.iter_mut().enumerate() {
            *c /= half.powi(j as i32);
        }
        Ok(LocalFit { centre, coefficients, residual, window: [from, to] })
    }

    /// How far from `centre` the profile goes on falling at a similar rate, up to `reach` of width.
    fn edge(&self, centre: f64, width: f64, reach: f64, side: f64) -> f64 {
        const STEPS: u32 = 400;
        let end = if side < 0.0 { self.from } else { self.to };
        let fall = self.fall(centre);
        let mut last = (centre, 0.0);
        for j in 1..=STEPS {
            // Finer near the centre, where little width may be lost in a step.
            let share = f64::from(j) / f64::from(STEPS);
            let s = centre + (end - centre) * share * share;
            let lost = side * (width - self.width(s));
            let steepness = self.fall(s) / fall;
            if lost.is_nan() || lost <= last.1 || !(0.3..3.3).contains(&steepness) {
                return last.0;
            }
            if lost > reach {
                return self.within(last.0, s, width, reach);
            }
            last = (s, lost);
        }
        last.0
    }

    /// Where exactly the width lost reaches `reach`.
    fn within(&self, near: f64, far: f64, width: f64, reach: f64) -> f64 {
        let (mut near, mut far) = (near, far);
        for _ in 0..40 {
            let middle = 0.5 * (near + far);
            if (width - self.width(middle)).abs() > reach { far = middle } else { near = middle }
        }
        near
    }
}

/// Width against range round a cut-off.
#[derive(Clone, Debug)]
pub(super) struct LocalFit {
    /// Range where the profile itself has the cut-off width.
    pub centre: f64,
    /// `D = d_0 + d_1 (s - centre) + ..`
    pub coefficients: Vec<f64>,
    /// Largest departure from the caller's profile, in range.
    pub residual: f64,
    /// First and last range of the window.
    pub window: [f64; 2],
}

impl LocalFit {
    /// Taylor coefficients of the width about the range where it is `width`, and that range; the width is complex
    /// with losses.
    pub fn about(&self, width: Complex64) -> (Complex64, Vec<Complex64>) {
        let mut offset = Complex64::new(0.0, 0.0);
        let mut taylor = expand(&self.coefficients, offset);
        // Newton's method: `centre` is near.
        for _ in 0..20 {
            let step = (width - taylor[0]) / taylor[1];
            offset += step;
            taylor = expand(&self.coefficients, offset);
            if step.norm() <= 1e-15 * offset.norm() {
                break;
            }
        }
        (offset + self.centre, taylor)
    }

    /// The width at a range.
    pub fn width(&self, range: f64) -> f64 {
        let x = range - self.centre;
        self.coefficients.iter().rev().fold(0.0, |sum, c| sum * x + c)
    }
}

/// Taylor coefficients of a polynomial about `x`.
fn expand(coefficients: &[f64], x: Complex64) -> Vec<Complex64> {
    let mut out: Vec<Complex64> = coefficients.iter().map(|&c| Complex64::from(c)).collect();
    for low in 0..out.len() {
        for j in (low..out.len() - 1).rev() {
            let above = out[j + 1];
            out[j] += above * x;
        }
    }
    out
}

/// Gradients at the points for which the cubics are monotone: the harmonic mean of the two
/// neighbouring slopes, weighted by their lengths, and the slope itself at the ends.
fn monotone_gradients(x: &[f64], y: &[f64]) -> Vec<f64> {
    let last = x.len() - 1;
    let slope = |i: usize| (y[i + 1] - y[i]) / (x[i + 1] - x[i]);
    (0..=last)
        .map(|i| {
            if i == 0 || i == last {
                return slope(if i == 0 { 0 } else { last - 1 });
            }
            let (before, after) = (slope(i - 1), slope(i));
            if before * after <= 0.0 {
                return 0.0;
            }
            let (left, right) = (x[i] - x[i - 1], x[i + 1] - x[i]);
            let share = (left + 2.0 * right) / (3.0 * (left + right));
            1.0 / (share / before + (1.0 - share) / after)
        })
        .collect()
}

/// Coefficients in powers of `u`, `|u| <= 1`, by the normal equations.
fn least_squares(places: &[(f64, f64)], degree: usize) -> Option<Vec<f64>> {
    let n = degree + 1;
    let mut rows = vec![vec![0.0; n + 1]; n];
    for &(u, s) in places {
        for (i, row) in rows.iter_mut().enumerate() {
            for (j, entry) in row.iter_mut().enumerate() {
                let power = if j == n { s } else { u.powi(j as i32) };
                *entry += u.powi(i as i32) * power;
            }
        }
    }
    // Gauss elimination; the matrix is positive definite.
    for i in 0..n {
        for below in i + 1..n {
            let (upper, lower) = rows.split_at_mut(below);
            let (pivot, row) = (&upper[i], &mut lower[0]);
            let ratio = row[i] / pivot[i];
            for (entry, above) in row.iter_mut().zip(pivot) {
                *entry -= ratio * above;
            }
        }
    }
    let mut out = vec![0.0; n];
    for i in (0..n).rev() {
        let known: f64 = (i + 1..n).map(|j| rows[i][j] * out[j]).sum();
        out[i] = (rows[i][n] - known) / rows[i][i];
    }
    out.iter().all(|c| c.is_finite()).then_some(out)
}
