//! How much any result changes with the figures it was computed from, and how good that derivative is.
//!
//! The result is computed at the sixteen Chebyshev nodes of an interval about a figure; the derivative is
//! that of the polynomial through them, `sum of j c_j U_{j-1}` (DLMF 18.3, 18.9.21). Where the coefficients
//! `c_j` no longer fall, what is left is noise of the result or what the polynomial leaves out: three times the
//! largest of the last four, carried through the sum, is the error figure. The interval begins at a quarter of
//! the figure's own scale and shrinks by four each time, until the figure is as good as rounding allows; the best is
//! kept. An interval counts only if the coefficients fall at all, else a rapid oscillation would pass for noise.
//! Source: Chebyshev interpolation, common practice; the error figure is derived here and
//! calibrated in `tests/guide_users.rs`.

use super::profile::Profile;
use crate::Error;
use std::f64::consts::PI;

/// A derivative with its error figure.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Derivative {
    /// The derivative, in the result's unit per unit of the figure.
    pub value: f64,
    /// Its error figure, in the same unit; infinite where the result shows no smooth part at any step.
    pub error: f64,
}

/// A figure to differentiate by.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Figure {
    value: f64,
    scale: f64,
    limits: [f64; 2],
}

impl Figure {
    /// A value and the change of it by which results may become singular: for most figures the value
    /// itself, for the speeds of two media their difference. The first step is an eighth of that.
    pub fn new(value: f64, scale: f64) -> Self {
        Figure { value, scale, limits: [f64::NEG_INFINITY, f64::INFINITY] }
    }

    /// The same, never tried outside these limits (an attenuation is not negative).
    pub fn within(self, low: f64, high: f64) -> Self {
        Figure { limits: [low, high], ..self }
    }

    /// The value.
    pub fn value(&self) -> f64 {
        self.value
    }
}

/// What [`sensitivities`] can differentiate by: the figures of a sea ([`TwoLayer`](super::TwoLayer)), of a slab
/// ([`Slab`](super::Slab)), of a well ([`QuantumWell`](super::QuantumWell): none, its units are its own).
///
/// Callers may implement it for a struct of their own, with the depth of a receiver in it, say.
///
/// ```
/// use merging_saddles::Error;
/// use merging_saddles::guide::{Figure, Figures, Profile, sensitivities};
/// #[derive(Clone, Copy)]
/// struct Pendulum<T = f64> { length_m: T }
/// impl Figures for Pendulum {
///     type Of<T> = Pendulum<T>;
///     fn map<T>(
///         &self,
///         mut f: impl FnMut(Figure) -> Result<T, Error>,
///     ) -> Result<Pendulum<T>, Error> {
///         Ok(Pendulum { length_m: f(Figure::new(self.length_m, self.length_m))? })
///     }
/// }
/// let period = |p: &Pendulum, _: &Profile| Ok(6.283185307179586 * (p.length_m / 9.81).sqrt());
/// let at = Pendulum { length_m: 2.0 };
/// let flat = Profile::plane(1.0, 1.0)?; // has no part in it
/// let s = sensitivities(&at, &flat, period)?.per.length_m;
/// // d(sqrt L)/sqrt L = dL/(2 L).
/// assert!((s.value / (period(&at, &flat)? / 4.0) - 1.0).abs() < 1e-12);
/// # Ok::<(), Error>(())
/// ```
pub trait Figures: Sized {
    /// The same struct with a `T` in place of each figure.
    type Of<T>;

    /// Calls the function with each figure, always in the same order, and puts its results in their places.
    ///
    /// Errors: those of the function.
    fn map<T>(&self, f: impl FnMut(Figure) -> Result<T, Error>) -> Result<Self::Of<T>, Error>;
}

/// Derivatives of a result with respect to all that it was computed from.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Sensitivities<D> {
    /// Per unit of each figure, under the figure's name: `per.frequency_hz.value` is in the result's unit per Hz.
    pub per: D,
    /// Per unit of fall (width lost per range; the tangent of a bed's slope, the speed of a well's
    /// walls): the profile turns about its first range, a plane one about range 0.
    ///
    /// About the range `s` further on it is `per_fall + s * per_width`; per rad of slope it is `per_fall`
    /// times `1 + tan(slope)^2`.
    pub per_fall: Derivative,
    /// Per unit of width, the same everywhere: a tide, or the bias of a mask.
    pub per_width: Derivative,
}

/// Derivatives of `quantity(figures, profile)`: a cut-off range, an angle, a level, anything computed from the
/// figures of a guide and the profile along which it narrows. One way for all three physics.
///
/// Accuracy: cut-off depths and ranges 1e-13, 5e-12 where the speeds differ by 1 m/s in 1500; levels by quadrature
/// 1e-11 or so; a beam's axis, which is searched for, 1e-6. Each derivative has its error figure, 15 times the error at
/// the median, which covers noise and small jumps of the result as well (999 of 1000 cases). A quantity that is
/// refused at some neighbouring figures is tried closer by.
///
/// Cost: 16 or 32 evaluations for each figure, for the fall and for the width; up to 160 for rapid or noisy results.
///
/// Errors: those of `quantity` at the figures themselves, or all round them; [`Error::Domain`] for a result or a
/// figure that is not finite.
///
/// ```
/// use merging_saddles::guide::{AcousticGuide, Profile, TwoLayer, sensitivities};
/// let sea = TwoLayer {
///     frequency_hz: 100.0,
///     water_speed_m_per_s: 1500.0,
///     bottom_speed_m_per_s: 1550.0,
///     water_density_kg_per_m3: 1000.0,
///     bottom_density_kg_per_m3: 1800.0,
///     water_attenuation_db_per_wavelength: 0.0,
///     bottom_attenuation_db_per_wavelength: 0.0,
/// };
/// let bed = Profile::plane(100.0, 0.02)?;
/// let range = |sea: &TwoLayer, bed: &Profile| {
///     Ok(AcousticGuide::new(*sea)?.cutoff_place(2, bed)?.range_m)
/// };
/// let s = sensitivities(&sea, &bed, range)?;
/// // range = (100 - h)/fall with h = (n - 1/2) pi/q (textbook modal relation): by hand
/// // dh/dc_w = h (omega^2/c_w^3)/q^2, dh/df = -h/f.
/// let h = AcousticGuide::new(sea)?.cutoff_depth_m(2)?;
/// let (water, bottom) = (1500f64.powi(-2), 1550f64.powi(-2));
/// let per_speed = -h * water / (water - bottom) / 1500.0 / 0.02;
/// assert!((s.per.water_speed_m_per_s.value / per_speed - 1.0).abs() < 1e-11);
/// assert!((s.per.water_speed_m_per_s.value - per_speed).abs() <= s.per.water_speed_m_per_s.error);
/// assert!((s.per.frequency_hz.value / (h / 100.0 / 0.02) - 1.0).abs() < 1e-11);
/// assert!((s.per_fall.value / ((h - 100.0) / 0.02f64.powi(2)) - 1.0).abs() < 1e-11);
/// assert!((s.per_width.value - 50.0).abs() < 1e-9); // a metre more water: 1/fall farther
/// assert_eq!(s.per.bottom_density_kg_per_m3.value, 0.0);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn sensitivities<M: Figures<Of<f64> = M>>(
    figures: &M,
    profile: &Profile,
    quantity: impl Fn(&M, &Profile) -> Result<f64, Error>,
) -> Result<Sensitivities<M::Of<Derivative>>, Error> {
    let at = |figures: &M, profile: &Profile| {
        let value = quantity(figures, profile)?;
        Error::require_finite("quantity", value)?;
        Ok(value)
    };
    let centre = at(figures, profile)?;
    let mut place = 0;
    let per = figures.map(|figure| {
        let chosen = place;
        place += 1;
        derivative(figure, centre, |x| {
            let mut place = 0;
            let other = figures.map(|figure| {
                place += 1;
                Ok(if place - 1 == chosen { x } else { figure.value })
            });
            at(&other?, profile)
        })
    })?;
    let (fall, width) = sizes(profile);
    let none = |scale: f64| Figure::new(0.0, scale);
    Ok(Sensitivities {
        per,
        per_fall: derivative(none(fall), centre, |x| at(figures, &changed(profile, x, 0.0)?))?,
        per_width: derivative(none(width), centre, |x| at(figures, &changed(profile, 0.0, x)?))?,
    })
}

/// Mean steepness and width of a profile.
fn sizes(profile: &Profile) -> (f64, f64) {
    let [from, to] = profile.ranges();
    if from.is_infinite() {
        return (profile.fall(0.0), profile.width(0.0));
    }
    const PLACES: u32 = 32;
    let share = f64::from(PLACES).recip();
    (0..PLACES).map(|j| from + (to - from) * (f64::from(j) + 0.5) * share).fold(
        (0.0, 0.0),
        |(fall, width), s| {
            (fall + share * profile.fall(s).abs(), width + share * profile.width(s).abs())
        },
    )
}

/// A profile that falls by so much more per range and is so much wider.
fn changed(profile: &Profile, fall: f64, width: f64) -> Result<Profile, Error> {
    let [from, to] = profile.ranges();
    if from.is_infinite() {
        return Profile::plane(profile.width(0.0) + width, profile.fall(0.0) + fall);
    }
    let before = profile.clone();
    Profile::from_fn(from, to, move |s| {
        (before.width(s) + width - fall * (s - from), -before.fall(s) - fall)
    })
}

/// Nodes in an interval.
const NODES: usize = 16;
/// Intervals at the most, each a quarter of the one before.
const INTERVALS: i32 = 10;

/// The derivative at a figure where the result is `centre`.
fn derivative(
    figure: Figure,
    centre: f64,
    f: impl Fn(f64) -> Result<f64, Error>,
) -> Result<Derivative, Error> {
    let Figure { value, scale, limits: [low, high] } = figure;
    Error::require_finite("figure", value)?;
    Error::require_positive("scale of a figure", scale)?;
    let mut best: Option<Derivative> = None;
    let (mut refusal, mut finest, mut worse) = (None, None, 0);
    for interval in 0..INTERVALS {
        let step = scale / 8.0 * 0.25f64.powi(interval);
        let [from, to] = [(value - step).max(low), (value + step).min(high)];
        let Interpolant { slope, error, size, falls, level } =
            match interpolate(value, centre, from, to, &f) {
                Ok(interpolant) => interpolant,
                Err(error) => {
                    refusal = Some(error);
                    continue;
                }
            };
        finest = Some(slope);
        if !falls {
            continue;
        }
        if best.is_none_or(|best| error < best.error) {
            best = Some(Derivative { value: slope, error });
            worse = 0;
        } else {
            worse += 1;
        }
        let fine = error <= 1e-11 * slope.abs() || error <= 1e-12 * size / scale;
        if fine || level || worse == 2 {
            break;
        }
    }
    match (best, finest, refusal) {
        (Some(best), ..) => Ok(best),
        (None, Some(value), _) => Ok(Derivative { value, error: f64::INFINITY }),
        (None, None, Some(refusal)) => Err(refusal),
        (None, None, None) => Err(Error::domain("figure", value, "give limits round the figure")),
    }
}

/// A result near a figure as a Chebyshev series.
struct Interpolant {
    slope: f64,
    error: f64,
    /// Largest value of the result.
    size: f64,
    /// Whether the coefficients fall, or are all as small as noise.
    falls: bool,
    /// Whether they have come down to a level of noise.
    level: bool,
}

fn interpolate(
    value: f64,
    centre: f64,
    from: f64,
    to: f64,
    f: impl Fn(f64) -> Result<f64, Error>,
) -> Result<Interpolant, Error> {
    let (middle, half) = (0.5 * (from + to), 0.5 * (to - from));
    let angle = |i: usize| PI * (i as f64 + 0.5) / NODES as f64;
    let mut results = [0.0; NODES];
    for (i, result) in results.iter_mut().enumerate() {
        *result = f(middle + half * angle(i).cos())? - centre;
    }
    let size = results.iter().fold(centre.abs(), |size, r| size.max((r + centre).abs()));
    let u = (value - middle) / half;
    // U_{j-2} and U_{j-1} at the figure.
    let (mut before, mut second) = (0.0, 1.0);
    let (mut slope, mut carried) = (0.0, 0.0);
    let (mut lead, mut before_tail, mut tail) = (0.0f64, 0.0f64, 0.0f64);
    for j in 1..NODES {
        let weights = (0..NODES).map(|i| (angle(i) * j as f64).cos());
        let sum: f64 = results.iter().zip(weights).map(|(r, w)| r * w).sum();
        let coefficient = 2.0 / NODES as f64 * sum;
        let weight = j as f64 * second / half;
        slope += coefficient * weight;
        carried += weight.abs();
        lead = lead.max(coefficient.abs());
        if j + 4 >= NODES {
            tail = tail.max(coefficient.abs());
        } else if j + 8 >= NODES {
            before_tail = before_tail.max(coefficient.abs());
        }
        (before, second) = (second, 2.0 * u * second - before);
    }
    let error = (3.0 * tail + 0.5 * f64::EPSILON * size) * carried;
    let falls = tail <= 1e-3 * lead || tail <= 1e-8 * size;
    // Rounding and the like, which a shorter interval would only magnify.
    let level = tail <= 1e-9 * size && before_tail <= 3.0 * tail;
    Ok(Interpolant { slope, error, size, falls, level })
}
