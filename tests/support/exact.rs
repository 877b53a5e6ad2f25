//! Random integrals to twenty and more digits: the error figure's true errors are measured against these.
//!
//! Method. Double-double arithmetic (Knuth's sums, Dekker's products, common practice) along
//! paths of its own, which owe nothing to the crate: from each saddle point (a zero of `f'`, by simultaneous
//! iteration or Newton) straight arms to the lowest points of a circle on which `k f` changes by
//! 1, from there down by the midpoint rule into a valley. The arms join the valleys; the lowest way
//! through them from the contour's first valley to its last is integrated, by 20-point
//! Gauss-Legendre on chords short enough for it. Which way round the amplitude's poles the
//! contour goes is made good by residues and winding numbers. A finite end has one arm.

use super::random::{Law, Recipe};
use merging_saddles::Complex64;
use merging_saddles::integral::Termination;
use std::f64::consts::{PI, TAU};
use std::ops::{Add, Mul, Neg, Sub};
use std::sync::OnceLock;

type C = Complex64;

/// A sum of two doubles.
#[derive(Clone, Copy, Debug)]
pub struct Dd {
    pub hi: f64,
    lo: f64,
}

fn two_sum(a: f64, b: f64) -> Dd {
    let hi = a + b;
    let from_b = hi - a;
    Dd { hi, lo: (a - (hi - from_b)) + (b - from_b) }
}

fn quick(a: f64, b: f64) -> Dd {
    let hi = a + b;
    Dd { hi, lo: b - (hi - a) }
}

fn two_product(a: f64, b: f64) -> Dd {
    let halves = |a: f64| {
        let shifted = 134_217_729.0 * a;
        let top = shifted - (shifted - a);
        (top, a - top)
    };
    let hi = a * b;
    let ((a1, a2), (b1, b2)) = (halves(a), halves(b));
    Dd { hi, lo: ((a1 * b1 - hi) + a1 * b2 + a2 * b1) + a2 * b2 }
}

impl From<f64> for Dd {
    fn from(hi: f64) -> Dd {
        Dd { hi, lo: 0.0 }
    }
}

impl Add for Dd {
    type Output = Dd;
    fn add(self, other: Dd) -> Dd {
        let (high, low) = (two_sum(self.hi, other.hi), two_sum(self.lo, other.lo));
        let sum = quick(high.hi, high.lo + low.hi);
        quick(sum.hi, sum.lo + low.lo)
    }
}

impl Neg for Dd {
    type Output = Dd;
    fn neg(self) -> Dd {
        Dd { hi: -self.hi, lo: -self.lo }
    }
}

impl Sub for Dd {
    type Output = Dd;
    fn sub(self, other: Dd) -> Dd {
        self + -other
    }
}

impl Mul for Dd {
    type Output = Dd;
    fn mul(self, other: Dd) -> Dd {
        let product = two_product(self.hi, other.hi);
        quick(product.hi, product.lo + (self.hi * other.lo + self.lo * other.hi))
    }
}

impl Dd {
    fn inverse(self) -> Dd {
        let first = Dd::from(1.0 / self.hi);
        first + first * (Dd::from(1.0) - self * first)
    }

    /// Whole multiples of a constant (three doubles) and the rest.
    fn reduce(self, parts: [f64; 3]) -> (f64, Dd) {
        let n = (self.hi / parts[0]).round();
        let rest = self - two_product(n, parts[0]) - two_product(n, parts[1]);
        (n, rest - two_product(n, parts[2]))
    }

    /// `e^x`.
    fn exp(self) -> Dd {
        let (n, rest) = self.reduce(LN_2);
        let r = rest * Dd::from(1.0 / 64.0);
        let mut sum = Dd::from(1.0);
        for n in (1..14).rev() {
            sum = Dd::from(1.0) + sum * r * inverses()[n];
        }
        for _ in 0..6 {
            sum = sum * sum;
        }
        // In two factors, so that neither leaves the range.
        let half = (n * 0.5).trunc();
        let power = |n: f64| Dd::from(2f64.powi(n.clamp(-1000.0, 1000.0) as i32));
        sum * power(half) * power(n - half)
    }

    /// cos and sin.
    fn cos_sin(self) -> (Dd, Dd) {
        let (n, r) = self.reduce(HALF_PI);
        let square = -(r * r);
        let (mut cos, mut sin) = (Dd::from(1.0), Dd::from(1.0));
        for n in (1..15).rev() {
            let m = 2 * n;
            cos = Dd::from(1.0) + cos * square * inverses()[m * (m - 1)];
            sin = Dd::from(1.0) + sin * square * inverses()[m * (m + 1)];
        }
        sin = sin * r;
        match (n as i64).rem_euclid(4) {
            0 => (cos, sin),
            1 => (-sin, cos),
            2 => (-cos, -sin),
            _ => (sin, -cos),
        }
    }
}

/// `1/n`.
fn inverses() -> &'static [Dd; 813] {
    static ONCE: OnceLock<[Dd; 813]> = OnceLock::new();
    ONCE.get_or_init(|| std::array::from_fn(|n| Dd::from(n as f64).inverse()))
}

const LN_2: [f64; 3] = [std::f64::consts::LN_2, 2.3190468138462996e-17, 5.707708438416212e-34];
const HALF_PI: [f64; 3] =
    [std::f64::consts::FRAC_PI_2, 6.123233995736766e-17, -1.4973849048591698e-33];

/// A complex number of two of them.
#[derive(Clone, Copy, Debug)]
pub struct Cd {
    pub re: Dd,
    pub im: Dd,
}

impl From<C> for Cd {
    fn from(z: C) -> Cd {
        Cd { re: z.re.into(), im: z.im.into() }
    }
}

impl From<f64> for Cd {
    fn from(x: f64) -> Cd {
        Cd { re: x.into(), im: 0.0.into() }
    }
}

impl Add for Cd {
    type Output = Cd;
    fn add(self, other: Cd) -> Cd {
        Cd { re: self.re + other.re, im: self.im + other.im }
    }
}

impl Sub for Cd {
    type Output = Cd;
    fn sub(self, other: Cd) -> Cd {
        Cd { re: self.re - other.re, im: self.im - other.im }
    }
}

impl Mul for Cd {
    type Output = Cd;
    fn mul(self, other: Cd) -> Cd {
        Cd {
            re: self.re * other.re - self.im * other.im,
            im: self.re * other.im + self.im * other.re,
        }
    }
}

impl Cd {
    pub fn rounded(self) -> C {
        C::new(self.re.hi, self.im.hi)
    }

    fn inverse(self) -> Cd {
        let square = (self.re * self.re + self.im * self.im).inverse();
        Cd { re: self.re * square, im: -(self.im * square) }
    }

    fn exp(self) -> Cd {
        let size = self.re.exp();
        let (cos, sin) = self.im.cos_sin();
        Cd { re: size * cos, im: size * sin }
    }
}

/// An integral's exact value: `value * 2^exponent`.
pub struct Exact {
    pub value: Cd,
    pub exponent: i64,
}

impl Exact {
    /// `|approximation - value|` and `|value|`, at this exponent.
    pub fn difference(&self, approximation: C) -> (f64, f64) {
        ((Cd::from(approximation) - self.value).rounded().norm(), self.value.rounded().norm())
    }
}

/// Where the arms from one point lead: the valley, and the way there.
struct Arm {
    valley: i64,
    points: Vec<C>,
}

struct Hub {
    height: f64,
    arms: Vec<Arm>,
}

struct Scene<'a> {
    recipe: &'a Recipe,
    k: f64,
    /// Beyond this distance a valley is decided.
    radius: f64,
}

/// The value, or None where the arms do not join the two ends, or only by a way far too high.
pub fn exact(recipe: &Recipe, k: f64) -> Option<Exact> {
    let radius = match &recipe.law {
        Law::Polynomial(c) => {
            let lead = c[c.len() - 1].norm();
            let rest = c[1..c.len() - 1].iter().map(|c| c.norm() / lead).fold(0.0, f64::max);
            (1.5 * (1.0 + rest)).max(8.0)
        }
        Law::Entire { .. } => 0.0,
    };
    let scene = Scene { recipe, k, radius };
    let points = recipe.contour.points();
    let (first, last) = (points[0], points[points.len() - 1]);
    let mut ways = Vec::new();
    let mut closed = points.to_vec();
    let mut valleys = [0; 2];
    for (index, (at, end)) in
        [(first, recipe.contour.start()), (last, recipe.contour.end())].into_iter().enumerate()
    {
        let finite = end == Termination::Finite;
        let arm = if finite { scene.hub(at, true)?.arms.pop()? } else { scene.descend(at, at)? };
        valleys[index] = arm.valley;
        let way = arm.points;
        if finite {
            ways.push((way, if index == 0 { 1.0 } else { -1.0 }));
        } else if index == 0 {
            closed.splice(0..0, way[1..].iter().rev().copied());
        } else {
            closed.extend(&way[1..]);
        }
    }
    scene.join(valleys, &mut ways)?;
    // The way itself, end to end, to close the contour with.
    let mut back: Vec<C> = Vec::new();
    let finish = (recipe.contour.end() == Termination::Finite)
        .then(|| ways.remove(usize::from(recipe.contour.start() == Termination::Finite)));
    ways.extend(finish);
    for (way, sign) in &ways {
        if *sign > 0.0 {
            back.extend(way);
        } else {
            back.extend(way.iter().rev());
        }
    }
    closed.extend(back.into_iter().rev());
    let top = |way: &[C]| way.iter().map(|&z| scene.jet(z)[0].re).fold(f64::NEG_INFINITY, f64::max);
    let mut reference = ways.iter().map(|(way, _)| top(way)).fold(f64::NEG_INFINITY, f64::max);
    let turns: Vec<f64> = recipe.parts.iter().map(|part| winding(&closed, part.pole)).collect();
    for (part, n) in recipe.parts.iter().zip(&turns) {
        if *n != 0.0 {
            reference = reference.max(scene.jet(part.pole)[0].re);
        }
    }
    let mut sum = Cd::from(0.0);
    let mut size = 0.0;
    for (way, sign) in &ways {
        for chord in way.windows(2) {
            let low = |z: C| scene.jet(z)[0].re < reference - 80.0;
            if on_chord(chord[0], chord[1]).all(low) {
                continue;
            }
            let part = scene.chord(chord[0], chord[1], reference, 0) * Cd::from(*sign);
            size += part.rounded().norm();
            sum = sum + part;
        }
    }
    for (part, n) in recipe.parts.iter().zip(&turns) {
        if *n != 0.0 {
            let z = Cd::from(part.pole);
            let [h, slope] = scene.exact_phase(z);
            let residue = Cd::from(part.simple) + Cd::from(part.double) * slope;
            let pi = Dd { hi: 4.0 * HALF_PI[0], lo: 4.0 * HALF_PI[1] } * Dd::from(*n);
            let turn = Cd { re: 0.0.into(), im: pi };
            let part = residue * turn * (h - Cd::from(reference)).exp();
            size += part.rounded().norm();
            sum = sum + part;
        }
    }
    // Ways that climb higher than they need cancel: ten digits of thirty may go.
    if !(sum.rounded().norm() > 1e-10 * size) {
        return None;
    }
    let exponent = (reference / LN_2[0]).round();
    let rest =
        Dd::from(reference) - two_product(exponent, LN_2[0]) - two_product(exponent, LN_2[1]);
    let factor = Cd { re: rest.exp(), im: 0.0.into() };
    Some(Exact { value: sum * factor, exponent: exponent as i64 })
}

impl Scene<'_> {
    /// `i k f` with two derivatives.
    fn jet(&self, z: C) -> [C; 3] {
        let ik = C::new(0.0, self.k);
        self.recipe.law.jet(z).map(|f| f * ik)
    }

    /// `i k f` and its derivative.
    fn exact_phase(&self, z: Cd) -> [Cd; 2] {
        let [f, df] = self.recipe.law.exact(z);
        let times = |f: Cd| {
            let k = Dd::from(self.k);
            Cd { re: -(f.im * k), im: f.re * k }
        };
        [times(f), times(df)]
    }

    /// A point with its arms: all, or only the steepest.
    fn hub(&self, at: C, steepest: bool) -> Option<Hub> {
        const ANGLES: usize = 128;
        let here = self.jet(at)[0];
        let on = |radius: f64, n: usize| at + C::from_polar(radius, TAU * n as f64 / ANGLES as f64);
        let mut radius = 1e-9;
        while (0..16).map(|n| (self.jet(on(radius, 8 * n))[0] - here).norm()).fold(0.0, f64::max)
            < 1.0
        {
            radius *= 1.5;
            if radius > 100.0 {
                return None;
            }
        }
        let heights: Vec<f64> =
            (0..ANGLES).map(|n| (self.jet(on(radius, n))[0] - here).re).collect();
        let mut arms = Vec::new();
        for n in 0..ANGLES {
            let (before, after) = (heights[(n + ANGLES - 1) % ANGLES], heights[(n + 1) % ANGLES]);
            if heights[n] < -0.05 && heights[n] <= before && heights[n] < after {
                arms.push((heights[n], n));
            }
        }
        arms.sort_by(|a, b| a.0.total_cmp(&b.0));
        if steepest {
            arms.truncate(1);
        }
        let arms = arms.into_iter().filter_map(|(_, n)| self.descend(at, on(radius, n)));
        Some(Hub { height: here.re, arms: arms.collect() })
    }

    /// From `from` straight to `z`, then down into a valley.
    fn descend(&self, from: C, z: C) -> Option<Arm> {
        let mut points = vec![from];
        if z != from {
            points.push(z);
        }
        let top = self.jet(from)[0].re;
        let mut z = z;
        for _ in 0..4000 {
            let [h, slope, bend] = self.jet(z);
            let depth = top - h.re;
            if depth > 90.0
                && let Some(valley) = self.valley(z)
            {
                return Some(Arm { valley, points });
            }
            let change = if depth > 90.0 { 1e300 } else { 5.0 };
            let length = (change / slope.norm())
                .min(0.3 * slope.norm() / bend.norm())
                .min(0.3 * (1.0 + z.norm()));
            let down = |slope: C| -slope.conj() / slope.norm();
            let middle = z + down(slope) * (0.5 * length);
            z += down(self.jet(middle)[1]) * length;
            if !(z.re.is_finite() && z.im.is_finite()) {
                return None;
            }
            points.push(z);
        }
        None
    }

    fn valley(&self, z: C) -> Option<i64> {
        match &self.recipe.law {
            Law::Polynomial(c) => {
                let degree = (c.len() - 1) as f64;
                let angle = z.arg() * degree - 0.5 * PI + c[c.len() - 1].arg();
                (z.norm() > self.radius)
                    .then(|| ((angle / TAU).round() as i64).rem_euclid(degree as i64))
            }
            Law::Entire { kind, .. } => {
                let turns = |from: f64| ((z.im - from) / TAU).round() as i64;
                match kind {
                    _ if z.re.abs() < 3.0 => None,
                    0 => Some(2 * turns(if z.re > 0.0 { PI } else { 0.0 }) + i64::from(z.re > 0.0)),
                    1 => Some(if z.re > 0.0 { 2 * turns(PI) + 1 } else { 0 }),
                    2 => Some(2 * turns(0.0) + i64::from(z.re > 0.0)),
                    _ => Some(if z.re > 0.0 { 2 * turns(PI) + 1 } else { 0 }),
                }
            }
        }
    }

    /// Adds the lowest way from one valley to another.
    fn join(&self, valleys: [i64; 2], ways: &mut Vec<(Vec<C>, f64)>) -> Option<()> {
        if valleys[0] == valleys[1] {
            return Some(());
        }
        let mut hubs: Vec<Hub> = Vec::new();
        for at in self.recipe.law.saddles() {
            hubs.extend(self.hub(at, false));
        }
        hubs.sort_by(|a, b| a.height.total_cmp(&b.height));
        for count in 1..=hubs.len() {
            // Breadth first: which hub and valley each valley was reached from.
            let mut reached = vec![(valleys[0], 0, valleys[0])];
            let mut next = 0;
            while next < reached.len() {
                let from = reached[next].0;
                next += 1;
                for (index, hub) in hubs[..count].iter().enumerate() {
                    if hub.arms.iter().any(|arm| arm.valley == from) {
                        for arm in &hub.arms {
                            if reached.iter().all(|r| r.0 != arm.valley) {
                                reached.push((arm.valley, index, from));
                            }
                        }
                    }
                }
            }
            if reached.iter().all(|r| r.0 != valleys[1]) {
                continue;
            }
            let mut steps = Vec::new();
            let mut at = valleys[1];
            while at != valleys[0] {
                let &(valley, hub, from) = reached.iter().find(|r| r.0 == at)?;
                steps.push((from, hub, valley));
                at = from;
            }
            for (from, hub, to) in steps.into_iter().rev() {
                let arm = |v: i64| hubs[hub].arms.iter().find(|arm| arm.valley == v);
                ways.push((arm(from)?.points.clone(), -1.0));
                ways.push((arm(to)?.points.clone(), 1.0));
            }
            return Some(());
        }
        None
    }

    /// The integral over a chord, times `exp(-reference)`.
    fn chord(&self, a: C, b: C, reference: f64, level: usize) -> Cd {
        let (middle, half) = ((a + b) * 0.5, (b - a) * 0.5);
        let near = |part: &super::random::Part| (part.pole - middle).norm() < 2.0 * half.norm();
        let fast = on_chord(a, b).any(|z| self.jet(z)[1].norm() * half.norm() > 5.0);
        if fast || self.recipe.parts.iter().any(near) {
            // No value is better than one that may be off.
            if level == 60 {
                return Cd::from(f64::NAN);
            }
            return self.chord(a, middle, reference, level + 1)
                + self.chord(middle, b, reference, level + 1);
        }
        // The halves must be exact: ends are doubles, the middle and half-length are not.
        let exact_half = (Cd::from(b) - Cd::from(a)) * Cd::from(0.5);
        let exact_middle = (Cd::from(b) + Cd::from(a)) * Cd::from(0.5);
        let mut sum = Cd::from(0.0);
        for &(node, weight) in rule() {
            for node in [node, -node] {
                let s = Cd { re: exact_half.re * node, im: exact_half.im * node };
                let z = exact_middle + s;
                let [h, _] = self.exact_phase(z);
                let value = (h - Cd::from(reference)).exp() * self.recipe.amplitude(z);
                sum = sum + Cd { re: value.re * weight, im: value.im * weight };
            }
        }
        sum * exact_half
    }
}

/// Points of a chord at which it is looked at. A saddle in its middle must not make it look calm: nine values
/// of `f'`, a polynomial of degree five at most, bound it everywhere on the chord.
fn on_chord(a: C, b: C) -> impl Iterator<Item = C> {
    (0..=8).map(move |n| a + (b - a) * (f64::from(n) / 8.0))
}

/// Turns of a closed line about a point.
fn winding(line: &[C], about: C) -> f64 {
    let mut angle = 0.0;
    for (n, &z) in line.iter().enumerate() {
        let next = line[(n + 1) % line.len()];
        angle += ((next - about) / (z - about)).arg();
    }
    (angle / TAU).round()
}

/// Positive nodes and weights of the 20-point Gauss-Legendre rule (DLMF 3.5(v)).
fn rule() -> &'static [(Dd, Dd); 10] {
    static ONCE: OnceLock<[(Dd, Dd); 10]> = OnceLock::new();
    ONCE.get_or_init(|| {
        std::array::from_fn(|n| {
            let mut x = Dd::from((PI * (n as f64 + 0.75) / 20.5).cos());
            let mut slope = Dd::from(0.0);
            for _ in 0..8 {
                // P_n by its recurrence (DLMF 18.9.1), P'_20 from P_19.
                let (mut last, mut p) = (Dd::from(1.0), x);
                for m in 2..=20 {
                    let m = f64::from(m);
                    let next = (x * p * Dd::from(2.0 * m - 1.0) - last * Dd::from(m - 1.0))
                        * Dd::from(m).inverse();
                    (last, p) = (p, next);
                }
                let square = Dd::from(1.0) - x * x;
                slope = (last - x * p) * Dd::from(20.0) * square.inverse();
                x = x - p * slope.inverse();
            }
            let square = Dd::from(1.0) - x * x;
            (x, Dd::from(2.0) * (square * slope * slope).inverse())
        })
    })
}

impl Law {
    /// `f`, `f'` and `f''`.
    pub fn jet(&self, z: C) -> [C; 3] {
        match self {
            Law::Polynomial(c) => {
                let zero = C::new(0.0, 0.0);
                let (mut f, mut df, mut half) = (zero, zero, zero);
                for &c in c.iter().rev() {
                    half = half * z + df;
                    df = df * z + f;
                    f = f * z + c;
                }
                [f, df, half * 2.0]
            }
            Law::Entire { kind, a, b } => {
                let minus_i = C::new(0.0, -1.0);
                let jet = match kind {
                    0 => [z.sinh() - a * z, z.cosh() - a, z.sinh()],
                    1 => [z.exp() - a * z - z * z * 0.5, z.exp() - a - z, z.exp() - 1.0],
                    2 => [a * z - z.cosh(), a - z.sinh(), -z.cosh()],
                    _ => [z.exp() * b - a * z, z.exp() * b - a, z.exp() * b],
                };
                jet.map(|f| f * minus_i)
            }
        }
    }

    fn exact(&self, z: Cd) -> [Cd; 2] {
        match self {
            Law::Polynomial(c) => {
                let (mut f, mut df) = (Cd::from(0.0), Cd::from(0.0));
                for &c in c.iter().rev() {
                    df = df * z + f;
                    f = f * z + Cd::from(c);
                }
                [f, df]
            }
            Law::Entire { kind, a, b } => {
                let (a, b) = (Cd::from(*a), Cd::from(*b));
                let up = z.exp();
                let half = Cd::from(0.5);
                let pair = |sign: f64| (up + up.inverse() * Cd::from(sign)) * half;
                let [h, d] = match kind {
                    0 => [pair(-1.0) - a * z, pair(1.0) - a],
                    1 => [up - a * z - z * z * half, up - a - z],
                    2 => [a * z - pair(1.0), a - pair(-1.0)],
                    _ => [up * b - a * z, up * b - a],
                };
                let times = |h: Cd| Cd { re: h.im, im: -h.re };
                [times(h), times(d)]
            }
        }
    }

    /// Zeros of `f'`, those of an entire function within some periods.
    fn saddles(&self) -> Vec<C> {
        let mut found: Vec<C> = Vec::new();
        match self {
            Law::Polynomial(c) => {
                let count = c.len() - 2;
                let lead = c[count + 1] * (count + 1) as f64;
                let slope = |z: C| self.jet(z)[1];
                found = (0..count)
                    .map(|n| C::from_polar(0.7, 0.4 + TAU * n as f64 / count as f64))
                    .collect();
                for _ in 0..400 {
                    for n in 0..count {
                        let mut divisor = lead;
                        for m in (0..count).filter(|&m| m != n) {
                            divisor *= found[n] - found[m];
                        }
                        let step = slope(found[n]) / divisor;
                        if step.re.is_finite() && step.im.is_finite() {
                            found[n] -= step;
                        }
                    }
                }
            }
            Law::Entire { .. } => {
                for row in -30..60 {
                    for column in -8..9 {
                        let mut z = C::new(0.6 * f64::from(column), 0.5 * f64::from(row));
                        let mut settled = false;
                        for _ in 0..40 {
                            let [_, d, dd] = self.jet(z);
                            let step = d / dd;
                            z -= step;
                            settled = step.norm() < 1e-12;
                        }
                        if settled && found.iter().all(|s| (s - z).norm() > 1e-6) {
                            found.push(z);
                        }
                    }
                }
            }
        }
        found
    }
}

impl Recipe {
    fn amplitude(&self, z: Cd) -> Cd {
        let (a, b) = (Cd::from(self.smooth.a), Cd::from(self.smooth.b));
        let one = Cd::from(1.0);
        let mut g = match self.smooth.kind {
            0 => one,
            1 => one + a * z + b * z * z,
            _ => (a * z * Cd::from(0.5)).exp(),
        };
        for part in &self.parts {
            let inverse = (z - Cd::from(part.pole)).inverse();
            g = g + (Cd::from(part.double) * inverse + Cd::from(part.simple)) * inverse;
        }
        g
    }
}
