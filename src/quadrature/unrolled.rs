//! Algebraic ends of a contour, removed by a logarithmic variable.
//!
//! Method. One such end `b`: `z = b + e^s`, so that `(z - b)^(lambda - 1) dz = e^(lambda s) ds` has no
//! branch left, however the contour winds. Two, `b_0` and `b_1`: `e^s = (z - b_0)/(b_1 - z)`. The ends lie at
//! infinity in `s`, where the integrand falls off as `e^(-lambda |s|)`; the contour is cut where that is
//! below all rounding.
//!
//! Source: textbook (as in double exponential formulas, DLMF 3.5(i)).

use crate::integral::{Amplitude, Contour, Integral, Phase};
use num_complex::Complex64;

/// Nepers after which the rest is left out.
const NEPERS: f64 = 42.0;
/// Halvings of one piece of the contour at most.
const DEPTH: u32 = 40;

/// The change of variable.
#[derive(Clone, Copy, Debug)]
enum Map {
    /// `z = b + e^s`.
    One { base: Complex64 },
    /// `z = (b_0 + b_1 e^s)/(1 + e^s)`.
    Two { bases: [Complex64; 2] },
}

impl Map {
    /// `z`, `dz/ds` and `d^2 z/ds^2`.
    fn jet(self, s: Complex64) -> [Complex64; 3] {
        match self {
            Map::One { base } => {
                let e = s.exp();
                [base + e, e, e]
            }
            Map::Two { bases: [b0, b1] } => {
                // From the end that is nearer, so that nothing overflows.
                let (near, far, s, sign) =
                    if s.re <= 0.0 { (b0, b1, s, 1.0) } else { (b1, b0, -s, -1.0) };
                let e = s.exp();
                let inverse = (e + 1.0).inv();
                let slope = (far - near) * e * inverse * inverse;
                [near + (far - near) * e * inverse, slope * sign, slope * (1.0 - e) * inverse]
            }
        }
    }

    /// A value of `s` for a `z`.
    fn inverse(self, z: Complex64) -> Complex64 {
        match self {
            Map::One { base } => (z - base).ln(),
            Map::Two { bases: [b0, b1] } => ((z - b0) / (b1 - z)).ln(),
        }
    }
}

/// The phase in `s`.
pub(crate) struct UnrolledPhase<'a, P> {
    phase: &'a P,
    map: Map,
}

impl<P: Phase> Phase for UnrolledPhase<'_, P> {
    fn value_and_derivative(&self, s: Complex64) -> (Complex64, Complex64) {
        let [z, dz, _] = self.map.jet(s);
        let (f, df) = self.phase.value_and_derivative(z);
        (f, df * dz)
    }

    fn value(&self, s: Complex64) -> Complex64 {
        self.phase.value(self.map.jet(s)[0])
    }

    fn jet(&self, s: Complex64) -> [Complex64; 3] {
        let [z, dz, ddz] = self.map.jet(s);
        let [f, df, ddf] = self.phase.jet(z);
        [f, df * dz, ddf * dz * dz + df * ddz]
    }

    fn noise_scale(&self, s: Complex64) -> f64 {
        self.phase.noise_scale(self.map.jet(s)[0])
    }
}

/// The amplitude in `s` with the powers and `dz/ds`.
pub(crate) struct UnrolledAmplitude<'a, A> {
    amplitude: &'a A,
    map: Map,
    powers: [f64; 2],
    /// The powers' phases along the contour's first and last piece.
    constant: Complex64,
}

impl<A: Amplitude> Amplitude for UnrolledAmplitude<'_, A> {
    fn value(&self, s: Complex64) -> Complex64 {
        let z = self.map.jet(s)[0];
        let power = match self.map {
            Map::One { .. } => {
                s * if self.powers[0] == 1.0 { self.powers[1] } else { self.powers[0] }
            }
            Map::Two { bases: [b0, b1] } => {
                let span = Complex64::new((b1 - b0).norm().ln(), 0.0);
                // ln(1 + e^s), continued without a cut to the right.
                let logarithm =
                    if s.re <= 0.0 { (s.exp() + 1.0).ln() } else { s + ((-s).exp() + 1.0).ln() };
                let [p, q] = self.powers;
                // (z - b_0)^(p - 1) (b_1 - z)^(q - 1) dz/ds over its phase.
                span * (p + q - 1.0) + s * p - logarithm * (p + q)
            }
        };
        self.amplitude.value(z) * power.exp() * self.constant
    }
}

impl<P: Phase, A: Amplitude> Integral<P, A> {
    /// Whether an end is algebraic.
    pub(super) fn is_algebraic(&self) -> bool {
        self.powers() != [1.0; 2]
    }

    /// The same integral in `s`, for wavenumbers up to about `k`.
    pub(super) fn unrolled(
        &self,
        k: f64,
    ) -> Integral<UnrolledPhase<'_, P>, UnrolledAmplitude<'_, A>> {
        let points = self.contour().points();
        let last = points.len() - 1;
        let powers = self.powers();
        let (start, finish) = (points[0], points[last]);
        let algebraic = powers.map(|p| p != 1.0);
        let map = match algebraic {
            [true, true] => Map::Two { bases: [start, finish] },
            [_, false] => Map::One { base: start },
            [false, true] => Map::One { base: finish },
        };
        // Directions of the contour at its two ends.
        let (leaving, arriving) = (points[1] - start, finish - points[last - 1]);
        let depth = |lambda: f64| NEPERS / lambda + 12.0 + (1.0 + k).ln();
        let mut path = Vec::new();
        // A contour straight between its ends has one piece, which is cut at its middle.
        let middle = (start + finish) * 0.5;
        let inner: Vec<Complex64> = match algebraic {
            [true, true] if last == 1 => vec![middle],
            [true, true] => points[1..last].to_vec(),
            [true, false] => points[1..].to_vec(),
            _ => points[..last].to_vec(),
        };
        let mut s = map.inverse(inner[0]);
        if algebraic[0] {
            path.push(s - depth(powers[0]));
        }
        path.push(s);
        for pair in inner.windows(2) {
            lift(map, (pair[0], pair[1]), &mut s, DEPTH, &mut path);
        }
        let begin = path[0];
        let mut turned = 0.0;
        if algebraic[1] {
            let away = if algebraic[0] { 1.0 } else { -1.0 };
            let end = s + away * depth(powers[1]);
            path.push(end);
            if !algebraic[0] {
                // (b - z)^(lambda - 1), continued to s from the last piece: z - b = e^s there.
                turned = (arriving.arg() - end.im) * (powers[1] - 1.0);
            }
        }
        let constant = match algebraic {
            [true, true] => {
                // At the start z - b_0 = (b_1 - b_0) e^s: Im s where the contour leaves differs from
                // that of its next vertex by the turn about the other end. The finish likewise.
                let (next, last) = (inner[0], inner[inner.len() - 1]);
                let leaves = begin.im + ((finish - next) / (finish - start)).arg();
                let arrives = path[path.len() - 1].im + ((finish - start) / (last - start)).arg();
                let first = (leaving.arg() - leaves) * (powers[0] - 1.0);
                let second = (arriving.arg() + arrives) * (powers[1] - 1.0);
                Complex64::from_polar(1.0, first + second + (finish - start).arg())
            }
            [true, false] => {
                Complex64::from_polar(1.0, (leaving.arg() - begin.im) * (powers[0] - 1.0))
            }
            _ => Complex64::from_polar(1.0, turned),
        };
        let ends = [self.contour().start(), self.contour().end()];
        let contour = Contour::new(path, ends[0], ends[1]);
        let amplitude =
            UnrolledAmplitude { amplitude: self.amplitude_ref(), map, powers, constant };
        let lows = contour
            .points()
            .iter()
            .fold((0.0f64, 0.0f64), |(low, high), s| (low.min(s.im), high.max(s.im)));
        let mut unrolled =
            Integral::new(UnrolledPhase { phase: self.phase(), map }, contour).amplitude(amplitude);
        // A named pole has an image on each sheet that the contour may reach.
        for s in self.poles().iter().map(|&p| map.inverse(p)) {
            let turns = |angle: f64| ((angle - s.im) / std::f64::consts::TAU) as i32;
            for turn in turns(lows.0) - 1..=turns(lows.1) + 1 {
                let up = Complex64::new(0.0, std::f64::consts::TAU * f64::from(turn));
                unrolled = unrolled.pole(s + up);
            }
        }
        unrolled
    }
}

/// Carries a straight piece over: halved until the chord in `s` follows it.
fn lift(
    map: Map,
    (from, to): (Complex64, Complex64),
    s: &mut Complex64,
    depth: u32,
    path: &mut Vec<Complex64>,
) {
    let middle = (from + to) * 0.5;
    let nearest = |z: Complex64, s: Complex64| {
        let next = map.inverse(z);
        let turns = ((s.im - next.im) / std::f64::consts::TAU).round();
        next + Complex64::new(0.0, turns * std::f64::consts::TAU)
    };
    let half = nearest(middle, *s);
    let end = nearest(to, half);
    // Where the chord passes against the piece itself.
    let [z, dz, _] = map.jet((*s + end) * 0.5);
    let off = ((z - from) / (to - from)).im.abs() * (to - from).norm();
    let short = (end.im - s.im).abs() < 0.7 && (half.im - s.im).abs() < 0.7;
    if depth == 0 || (short && off < 0.05 * dz.norm()) {
        *s = end;
        path.push(end);
    } else {
        lift(map, (from, middle), s, depth - 1, path);
        lift(map, (middle, to), s, depth - 1, path);
    }
}
