//! The Pearcey integral on the real line.
//!
//! Near, `|x_2| <= 16` and `|x_1| <= 32`: one Taylor step from the nearest node of a table, in the
//! distance along the straight line to the point. Its coefficients follow by integration by parts,
//! as the differential equations of DLMF 36.10 do.
//! Far: every saddle on its own where it is lone and the others are far below; near the caustic two of them
//! together (the file `fold`); else descents.

use super::fold;
use super::lone::{self, is_lone};
use super::pearcey_nodes::{COLUMNS, NODES, ROWS};
use super::polynomial::{Polynomial, ZERO, moments_about_zero, precise, shifted};
use super::{Moments, descent};
use crate::Error;
use crate::special::double_double::exponential;
use num_complex::Complex64;

/// Distance of nodes in x_1.
const SPACING: f64 = 1.5;
/// The table reaches from `-HIGH` to `HIGH` in x_2 and to `WIDE` in x_1.
const HIGH: f64 = 16.0;
const WIDE: f64 = 32.0;
/// Complex saddles are left out where they lie this far below the real one.
const BELOW: f64 = 42.0;

/// Moments 0, 1, 2 over the real line for finite parameters within range.
#[inline]
pub(super) fn moments(x1: f64, x2: f64) -> Result<[Complex64; 3], Error> {
    // Even in x_1 (DLMF 36.2(iii)): m_1 changes its sign with it.
    let mirrored = x1.abs();
    let mut m =
        if mirrored <= WIDE && x2.abs() <= HIGH { near(mirrored, x2) } else { far(mirrored, x2)? };
    if x1 < 0.0 {
        m[1] = -m[1];
    }
    Ok(m)
}

/// Terms of the Taylor series at most.
const TERMS: usize = 60;
/// Terms below this part of the sum are left out.
const SMALL: f64 = 3e-18;

/// One Taylor coefficient of the moments 0 .. 4.
type Order = [Complex64; 5];

/// From the nearest node; `0 <= x1 <= WIDE`, `|x2| <= HIGH`.
fn near(x1: f64, x2: f64) -> [Complex64; 3] {
    // Rows lie closer where the outermost saddle is far out: every 1/2, 1, 2.
    let (row, n2) = if x2 < -8.0 {
        let step = (2.0 * (x2 + HIGH) + 0.5).floor();
        (step as usize, 0.5 * step - HIGH)
    } else if x2 < 0.0 {
        let step = (x2 + 8.5).floor();
        (16 + step as usize, step - 8.0)
    } else {
        let step = (0.5 * x2 + 0.5).floor();
        (24 + step as usize, 2.0 * step)
    };
    let row = row.min(ROWS - 1);
    let column = ((x1 * (1.0 / SPACING) + 0.5) as usize).min(COLUMNS - 1);
    let n1 = column as f64 * SPACING;
    let (d1, d2) = (x1 - n1, x2 - n2);
    let node = &NODES[row][column];
    let start = |j: usize| Complex64::new(node[2 * j], node[2 * j + 1]);
    let mut now: Order = [start(0), start(1), start(2), ZERO, ZERO];
    let mut before: Order = [ZERO; 5];
    let mut sum = [now[0], now[1], now[2]];
    for n in 1..TERMS {
        // integral of (t^j e^(i f))' dt = 0, j = 0 and 1, with f = f_node + s (d2 t^2 + d1 t).
        let a = now[1] * n2 + before[1] * d2;
        let b = now[2] * n2 + before[2] * d2;
        let c = now[0] * n1 + before[0] * d1;
        let e = now[1] * n1 + before[1] * d1;
        now[3] = -(a * 2.0 + c) * 0.25;
        let turned = Complex64::new(-now[0].im, now[0].re);
        now[4] = (turned - b * 2.0 - e) * 0.25;
        before = now;
        let inverse = 1.0 / n as f64;
        let (f1, f2) = (d1 * inverse, d2 * inverse);
        let (mut size, mut whole) = (0.0, 0.0);
        for j in 0..3 {
            let next = before[j + 2] * f2 + before[j + 1] * f1;
            now[j] = Complex64::new(-next.im, next.re);
            sum[j] += now[j];
            size += next.re.abs() + next.im.abs();
            whole += sum[j].re.abs() + sum[j].im.abs();
        }
        if size < SMALL * whole {
            break;
        }
    }
    sum
}

/// Outside the table, `x1 >= 0`.
fn far(x1: f64, x2: f64) -> Result<[Complex64; 3], Error> {
    let i = |x: f64| Complex64::new(0.0, x);
    let h: Polynomial = [ZERO, i(x1), i(x2), ZERO, i(1.0), ZERO, ZERO];
    let mut sum = [ZERO; 3];
    let add = |t: f64, sum: &mut [Complex64; 3]| {
        let at = Complex64::new(t, 0.0);
        let mut local = shifted::<4>(&h, at);
        if !is_lone::<4>(&local) {
            return false;
        }
        let (level, slope) = precise::<4>(&h, at);
        local[1] = slope.round();
        let mut m = lone::moments::<4>(&local, Complex64::new(1.0, 0.0));
        moments_about_zero(&mut m, 3, at);
        let factor = exponential(level).0;
        for (sum, m) in sum.iter_mut().zip(m) {
            *sum += factor * m;
        }
        true
    };
    // t^3 + p t + q = 0
    let (p, q) = (0.5 * x2, 0.25 * x1);
    let (half, third) = (0.5 * q, p / 3.0);
    let discriminant = half * half + third * third * third;
    let done = if discriminant < 0.0 {
        let radius = 2.0 * (-third).sqrt();
        let angle = (-half / (third * third.abs().sqrt()).abs()).acos() / 3.0;
        const THIRD: f64 = std::f64::consts::TAU / 3.0;
        let root = |turn: f64| polished(radius * (angle + turn).cos(), p, q);
        // The one at negative t stands alone first: its angle is between 2 pi/3 and pi.
        add(root(THIRD), &mut sum)
            && (fold::add(&h, x2, &mut sum)
                || [0.0, -THIRD].iter().all(|turn| add(root(*turn), &mut sum)))
    } else {
        let u = -(half + discriminant.sqrt()).cbrt();
        let v = -third / u;
        let real = polished(-q / (u * u + v * v + third), p, q);
        // The pair: t = -real/2 +- i sqrt(3)/2 (u - v).
        let pair = Complex64::new(-0.5 * real, 0.75f64.sqrt() * (u - v).abs());
        let square = pair * pair;
        let level = square * square + square * x2 + pair * x1;
        add(real, &mut sum) && (level.im > BELOW || fold::add(&h, x2, &mut sum))
    };
    if done {
        return Ok(sum);
    }
    let Moments { mantissas, exponent } = descent::sum::<4>(&h, &[1, 0, -1, 0, 0, 0])?;
    let factor = crate::scaled::pow2(exponent);
    Ok([mantissas[0] * factor, mantissas[1] * factor, mantissas[2] * factor])
}

/// One Newton step for `t^3 + p t + q = 0`.
fn polished(t: f64, p: f64, q: f64) -> f64 {
    let slope = 3.0 * t * t + p;
    let step = (t * (t * t + p) + q) / slope;
    if step.abs() < 1e-3 * t.abs() { t - step } else { t }
}
