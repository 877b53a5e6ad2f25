//! Primitives of analytic functions near a contour, tabulated.
//!
//! `F(w) = integral from 0 to w of rate(w) dw` for rates without a closed form. The region that the contours of
//! the guide cross is cut into squares; on each that the rate allows, `F` is a Taylor series whose coefficients
//! come from a circle round it (trapezoidal rule, DLMF 3.5(i)). Whether a square is allowed its own circle
//! tells: coefficients of negative powers vanish where the rate is analytic inside. If they do not, the
//! square is cut in four, and so on. Squares are made when they are first asked for. What is left beside singularities and
//! cuts, and all outside, is led by Gauss-Legendre
//! panels (DLMF 3.5(v)) from 0 to the point, round the pole of the width at `i pi/2` on the side of the
//! contour; panels are halved until they agree.
//!
//! Source: derived here.

use super::wide::WideAngle;
use crate::Complex64;
use std::f64::consts::{FRAC_PI_2, TAU};
use std::sync::OnceLock;

/// Side of the largest squares, lower left corner, columns and rows.
const SIDE: f64 = 0.4;
const CORNER: Complex64 = Complex64::new(-2.6, -1.0);
const COLUMNS: usize = 13;
const ROWS: usize = 9;
/// Terms of a series, and places on its circle.
const TERMS: usize = 36;
const CIRCLE: usize = 64;
/// Radius of the circle over half the side of the square.
const ROUND: f64 = 1.8;
/// How often a square may be cut in four.
const DEPTH: u32 = 6;

/// Nodes and weights of the 6-point Gauss-Legendre rule on (-1, 1), positive half (DLMF 3.5(v)).
const GAUSS: [(f64, f64); 3] = [
    (0.238_619_186_083_196_93, 0.467_913_934_572_691),
    (0.661_209_386_466_264_5, 0.360_761_573_048_138_6),
    (0.932_469_514_203_152, 0.171_324_492_379_170_36),
];

/// A place by which lines from 0 to places beyond the branch point `p = i` are led.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Gate {
    pub by: Complex64,
    /// The wide-angle form where the variable is its angle; else beyond is `Im w > pi/2`.
    pub wide: Option<WideAngle>,
}

impl Gate {
    /// Whether it is needed on the way.
    fn leads_to(self, z: Complex64) -> bool {
        self.wide.map_or(z.im > FRAC_PI_2, |wide| wide.beyond(z))
    }
}

/// The primitive of a rate that the caller keeps.
#[derive(Clone, PartialEq)]
pub(super) struct Table {
    squares: Vec<OnceLock<Square>>,
    gate: Gate,
    noise: f64,
    accuracy: f64,
}

#[derive(Clone, PartialEq)]
enum Square {
    /// Coefficients in powers of `(w - centre)/half`.
    Series(Vec<Complex64>),
    /// Lower left, lower right, upper left, upper right.
    Cut(Box<[OnceLock<Square>; 4]>),
    None,
}

impl Table {
    /// `noise` is the relative rounding of the rate, `accuracy` what is asked of the panels.
    pub(super) fn new(gate: Gate, noise: f64, accuracy: f64) -> Table {
        let squares = (0..ROWS * COLUMNS).map(|_| OnceLock::new()).collect();
        Table { squares, gate, noise, accuracy }
    }

    /// The primitive; `rate` must be the same at every call.
    pub(super) fn value(
        &self,
        w: Complex64,
        rate: impl Fn(Complex64) -> Complex64 + Copy,
    ) -> Complex64 {
        self.tabulated(w, rate).unwrap_or_else(|| self.reached(w, None, rate))
    }

    /// The primitive where it is not tabulated, from the last place that is on the way from where it is led from,
    /// other than in one square.
    fn reached(
        &self,
        w: Complex64,
        other_than: Option<usize>,
        rate: impl Fn(Complex64) -> Complex64 + Copy,
    ) -> Complex64 {
        // Beyond the squares the field is nothing, and a few digits are enough.
        let fine = index(w).map(|_| self.accuracy);
        let high = self.gate.leads_to(w);
        let from = if high { self.gate.by } else { Complex64::new(0.0, 0.0) };
        let length = (w - from).norm();
        let mut back = 0.01;
        while back < length {
            let place = w + (from - w) * (back / length);
            if index(place).is_none_or(|i| Some(i) != other_than && nearer(i, other_than))
                && self.gate.leads_to(place) == high
                && let Some(value) = self.tabulated(place, rate)
            {
                return value + along(place, w, fine, rate);
            }
            back *= 2.0;
        }
        led(self.gate, w, fine, rate)
    }

    fn tabulated(
        &self,
        w: Complex64,
        rate: impl Fn(Complex64) -> Complex64 + Copy,
    ) -> Option<Complex64> {
        let i = index(w)?;
        let build = Build { table: self, i, rate };
        let (mut middle, mut half) = (centre(i), 0.5 * SIDE);
        let mut square = self.squares.get(i)?.get_or_init(|| build.square(middle, half, 0));
        for depth in 1.. {
            // From the square's centre, over half its side.
            let offset = (w - middle) / half;
            match square {
                Square::None => break,
                Square::Series(series) => {
                    let start = Complex64::new(0.0, 0.0);
                    return Some(series.iter().rev().fold(start, |sum, c| sum * offset + c));
                }
                Square::Cut(quarters) => {
                    let (right, up) = (offset.re >= 0.0, offset.im >= 0.0);
                    half *= 0.5;
                    let side = |high: bool| if high { half } else { -half };
                    middle += Complex64::new(side(right), side(up));
                    let quarter = &quarters[usize::from(right) + 2 * usize::from(up)];
                    square = quarter.get_or_init(|| build.square(middle, half, depth));
                }
            }
        }
        None
    }
}

/// The square in which a place lies, if it is in one.
fn index(w: Complex64) -> Option<usize> {
    let place = (w - CORNER) / SIDE;
    let within = |x: f64, count: usize| (0.0..count as f64).contains(&x);
    let there = within(place.re, COLUMNS) && within(place.im, ROWS);
    there.then(|| place.im as usize * COLUMNS + place.re as usize)
}

fn centre(i: usize) -> Complex64 {
    CORNER + Complex64::new((i % COLUMNS) as f64 + 0.5, (i / COLUMNS) as f64 + 0.5) * SIDE
}

/// Whether a square may be asked for while another is made: if its centre is nearer to 0, so that none waits for itself.
fn nearer(i: usize, other: Option<usize>) -> bool {
    other.is_none_or(|other| (centre(i).norm(), i) < (centre(other).norm(), other))
}

struct Build<'a, F> {
    table: &'a Table,
    /// The square.
    i: usize,
    rate: F,
}

impl<F: Fn(Complex64) -> Complex64 + Copy> Build<'_, F> {
    fn square(&self, centre: Complex64, half: f64, depth: u32) -> Square {
        match self.series(centre, half) {
            Some(series) => Square::Series(series),
            None if depth < DEPTH => {
                Square::Cut(Box::new(std::array::from_fn(|_| OnceLock::new())))
            }
            None => Square::None,
        }
    }

    fn series(&self, centre: Complex64, half: f64) -> Option<Vec<Complex64>> {
        let turns: [Complex64; CIRCLE] =
            std::array::from_fn(|j| Complex64::from_polar(1.0, TAU * j as f64 / CIRCLE as f64));
        let values = turns.map(|t| (self.rate)(centre + t * (ROUND * half)));
        let coefficient = |n: usize| -> Complex64 {
            values.iter().enumerate().map(|(j, v)| v * turns[j * n % CIRCLE].conj()).sum()
        };
        let size = values.iter().map(|v| v.norm()).sum::<f64>();
        // Powers -1 to -12: of a function that is analytic inside there are none.
        let analytic =
            (CIRCLE - 12..CIRCLE).all(|n| coefficient(n).norm() <= self.table.noise * size);
        if !analytic || !size.is_finite() {
            return None;
        }
        let mut series = vec![self.table.reached(centre, Some(self.i), self.rate)];
        let mut scale = half / CIRCLE as f64;
        for n in 0..TERMS {
            series.push(coefficient(n) * (scale / (n + 1) as f64));
            scale /= ROUND;
        }
        Some(series)
    }
}

/// The primitive from panels.
pub(super) fn led(
    gate: Gate,
    w: Complex64,
    fine: Option<f64>,
    rate: impl Fn(Complex64) -> Complex64 + Copy,
) -> Complex64 {
    let zero = Complex64::new(0.0, 0.0);
    if gate.leads_to(w) {
        along(zero, gate.by, fine, rate) + along(gate.by, w, fine, rate)
    } else {
        along(zero, w, fine, rate)
    }
}

/// The integral of `rate` along a straight line, by panels that are halved until they agree to `fine`, if that is asked
/// for; beside a singularity, which is touched by nothing that counts, a bounded number of times.
fn along(
    from: Complex64,
    to: Complex64,
    fine: Option<f64>,
    rate: impl Fn(Complex64) -> Complex64 + Copy,
) -> Complex64 {
    const SHORTEST: f64 = 0.01;
    const HALVINGS: u32 = 12;
    const LONGEST: f64 = 0.32;
    let length = (to - from).norm();
    if length == 0.0 || !length.is_finite() {
        return (to - from) * length;
    }
    let direction = (to - from) / length;
    let panel = |[low, high]: [f64; 2]| -> Complex64 {
        let (middle, half) = (from + direction * (0.5 * (low + high)), 0.5 * (high - low));
        let sum: Complex64 = GAUSS
            .iter()
            .map(|&(node, weight)| {
                let offset = direction * (half * node);
                (rate(middle + offset) + rate(middle - offset)) * weight
            })
            .sum();
        sum * half
    };
    let mut sum = Complex64::new(0.0, 0.0);
    let mut done = 0.0;
    // A bounded number however far `to` is.
    let mut halvings = 0;
    let mut step = if fine.is_some() { LONGEST } else { (0.125 * length).max(0.5 * LONGEST) };
    while done < length {
        let mut end = length.min(done + step);
        let mut whole = panel([done, end]);
        while let Some(accuracy) = fine
            && end - done >= SHORTEST
            && halvings < HALVINGS
        {
            let middle = 0.5 * (done + end);
            let halves = [panel([done, middle]), panel([middle, end])];
            let both = halves[0] + halves[1];
            // The halves are nearer to the truth than to the whole by 2^11.
            let enough = accuracy * (0.05 * sum.norm() + both.norm());
            if (both - whole).norm() <= enough || both.is_nan() {
                whole = both;
                break;
            }
            (end, whole) = (middle, halves[0]);
            halvings += 1;
        }
        sum += whole;
        if fine.is_some() {
            step = (2.0 * (end - done)).min(LONGEST);
        }
        done = end;
    }
    sum * direction
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_primitive_round_its_singularities() {
        // Poles at i pi/2 and below 0; the primitive is elementary.
        let c = Complex64::new;
        let (pole, low) = (c(0.0, FRAC_PI_2), c(0.0, -0.13));
        let rate = |w: Complex64| (w - low).powi(-2) + 1.0 / (w - pole) + w.cosh();
        let table = Table::new(Gate { by: c(-0.5, FRAC_PI_2), wide: None }, 1e-13, 2e-11);
        // The logarithm has its cut to the right of the pole.
        let primitive = |w: Complex64| {
            let log = (pole - w).ln();
            -(w - low).inv() + log + w.sinh()
        };
        for w in [c(0.03, -0.02), c(0.2, 0.3), c(-0.7, 1.2), c(-1.1, 2.2), c(1.3, 0.7), c(3.0, 0.4)]
        {
            let error = table.value(w, rate) - (primitive(w) - primitive(c(0.0, 0.0)));
            assert!(error.norm() < 1e-11, "{w}: {error:e}");
            let tabulated = table.tabulated(w, rate).is_some();
            assert_eq!(tabulated, w.re < 2.0, "{w}");
        }
    }
}
