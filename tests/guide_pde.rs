//! The uniform field against a Crank-Nicolson solution of the tapered guide's equation.
//!
//! The solution starts from the adiabatic mode two units of width before cut-off. One constant
//! phase per run is taken out, the same inside, outside and at all times: it is the second-order
//! phase at the start (about `eps/2`). Errors are relative L2 norms over the inside and over the
//! outside up to ten layer lengths, at `t = (h_c - h)/(m^2 eps)^(1/3)`. Higher modes, which such a start would excite
//! as well, and other profiles are in `guide_accuracy.rs`.

#[path = "support/compare.rs"]
#[allow(dead_code)] // shared by several tests
mod compare;
#[path = "support/tapered.rs"]
#[allow(dead_code)] // shared by several tests
mod tapered;

use compare::{error, pairs, turn};
use merging_saddles::Complex64 as C;
use merging_saddles::guide::{AcousticGuide, Order, SlopingGuide, TwoLayer};
use std::f64::consts::PI;
use tapered::Taper;

/// Times of the layer at which the fields are compared; the phase is taken at the middle one.
const TIMES: [f64; 5] = [-2.0, -1.0, 0.0, 1.0, 2.0];

/// Errors inside and outside at every time, and the phase (with the known phase of the mode at
/// the start taken off), for the leading and the next order.
fn errors(mode: u32, m: f64, eps: f64) -> [([[f64; 2]; 5], f64); 2] {
    let cut = (f64::from(mode) - 0.5) * PI;
    let widths = TIMES.map(|t| cut - t * (m * m * eps).cbrt());
    let length = (m / eps).cbrt();
    let start = cut + 2.0;
    let taper = Taper::straight(mode, m, eps, start);
    let shots = taper.run(&widths.map(|h| -h), 25.0 * length, 1.0);
    [Order::Leading, Order::Next].map(|order| {
        let guide = SlopingGuide::new(mode, m, eps).unwrap().order(order);
        let field = |h: f64, x: f64, within: bool| {
            let field =
                if within { guide.inside(h, x) } else { guide.outside(h, (x - h).max(0.0)) };
            field.unwrap().quadrature(1e-8).unwrap().value
        };
        let sides: Vec<_> = shots.iter().map(|s| pairs(s, 10.0 * length, field)).collect();
        let turn = turn(&sides[2]);
        let known = guide.adiabatic(start).unwrap().exponent.exp();
        // The formula counts its sign from the boundary, the solution from the surface.
        let sign = if mode.is_multiple_of(2) { -1.0 } else { 1.0 };
        let mut table = [[0.0; 2]; 5];
        for (row, side) in table.iter_mut().zip(&sides) {
            *row = [error(&side[0], turn), error(&side[1], turn)];
        }
        println!("mode {mode} m {m} eps {eps} {order:?} (inside, outside): {table:?}");
        (table, (turn * known * sign).arg())
    })
}

#[test]
fn the_solution_itself_has_converged() {
    // Half the step and half the mesh: fourth order after extrapolation.
    let (eps, m) = (0.01f64, 1.0);
    let taper = Taper::straight(1, m, eps, 0.5 * PI + 2.0);
    let widths = TIMES.map(|t| 0.5 * PI - t * eps.cbrt());
    let length = eps.cbrt().recip();
    let coarse = taper.run(&widths.map(|h| -h), 25.0 * length, 1.0);
    let fine = taper.run(&widths.map(|h| -h), 25.0 * length, 2.0);
    for (a, b) in coarse.iter().zip(&fine) {
        let both: Vec<_> = (0..a.end).map(|i| (a.psi[i], b.psi[2 * i])).collect();
        for side in [&both[..a.inside], &both[a.inside..]] {
            let seen = error(side, C::from(1.0));
            assert!(seen < 4e-5, "{seen:e}");
        }
    }
}

#[test]
fn errors_and_their_rates() {
    let table = [0.04, 0.02, 0.01].map(|eps| errors(1, 1.0, eps));
    let rate = |order: usize, time: usize, side: usize| {
        let at = |row: usize| table[row][order].0[time][side];
        (at(0) / at(2)).log2() / 2.0
    };
    // Leading order outside: about eps before cut-off, eps^(2/3) to eps^(3/4) from it on.
    assert!((0.95..1.6).contains(&rate(0, 0, 1)), "{}", rate(0, 0, 1));
    for (time, t) in TIMES.iter().enumerate().skip(2) {
        let seen = rate(0, time, 1);
        assert!((0.62..0.80).contains(&seen), "t = {t}: {seen}");
    }
    // Next order: about eps^2 outside, and more than eps^1.2 inside wherever it is above the noise.
    for (time, t) in TIMES.iter().enumerate() {
        let seen = rate(1, time, 1);
        assert!(seen > 1.6, "t = {t}: {seen}");
        let inside = table[2][1].0[time][0];
        assert!(rate(1, time, 0) > 1.2 || inside < 5e-5, "t = {t}");
    }
    // At eps = 0.01: the leading order to some per cent, the next a hundred times better outside.
    let [(leading, _), (next, _)] = table[2];
    for time in 0..5 {
        assert!(leading[time][1] < 2.9e-2 && leading[time][0] < 3.6e-2, "{leading:?}");
        assert!(next[time][1] < 2.6e-4 && next[time][0] < 1.2e-3, "{next:?}");
        assert!(next[time][1] < leading[time][1] / 20.0);
    }
    // The phase that was taken out is of second order: proportional to eps.
    for (row, eps) in table.iter().zip([0.04, 0.02, 0.01]) {
        let seen = row[1].1 / eps;
        assert!((0.43..0.48).contains(&seen), "eps {eps}: {seen}");
    }
}

#[test]
fn other_densities_and_steep_slopes() {
    for m in [0.55, 1.5] {
        let [(leading, _), (next, _)] = errors(1, m, 0.02);
        for time in 0..5 {
            assert!(next[time][1] < 1.2e-3 && next[time][0] < 8e-3, "m {m}: {next:?}");
            assert!(next[time][1] < leading[time][1] / 5.0, "m {m}: {leading:?} {next:?}");
            assert!(next[time][0] < leading[time][0] / 8.0, "m {m}: {leading:?} {next:?}");
        }
    }
    // eps = 0.1: a bed of about 1 in 38. A few per cent by the next order.
    let [_, (next, _)] = errors(1, 0.55, 0.1);
    assert!(next.iter().all(|row| row[1] < 3.5e-2 && row[0] < 6e-3), "{next:?}");
}

#[test]
fn a_sea_in_physical_units() {
    // The whole chain: figures of a sea, its scaled guide, the pressure relative to the incoming mode.
    let sea = TwoLayer {
        frequency_hz: 75.0,
        water_speed_m_per_s: 1500.0,
        bottom_speed_m_per_s: 1680.0,
        water_density_kg_per_m3: 1000.0,
        bottom_density_kg_per_m3: 1850.0,
        water_attenuation_db_per_wavelength: 0.0,
        bottom_attenuation_db_per_wavelength: 0.0,
    };
    let guide = AcousticGuide::new(sea).unwrap();
    let (kw, kb) = (2.0 * PI * 75.0 / 1500.0, 2.0 * PI * 75.0 / 1680.0);
    let (q, m, gradient) = (f64::sqrt(kw * kw - kb * kb), 1.0 / 1.85, 0.005);
    let eps = 2.0 * kb * gradient / q;
    let start = 0.5 * PI + 2.0;
    let cut_off = guide.upslope(1, gradient.atan(), start / q).unwrap().paraxial().unwrap();
    assert!((cut_off.eps() / eps - 1.0).abs() < 1e-12);
    let widths = TIMES.map(|t| 0.5 * PI - t * (m * m * eps).cbrt());
    let length = (m / eps).cbrt();
    let taper = Taper::straight(1, m, eps, start);
    let shots = taper.run(&widths.map(|h| -h), 25.0 * length, 1.0);
    let antinode = taper.antinode();
    for shot in &shots {
        let range_m = (cut_off.cutoff_depth_m() - shot.h / q) / gradient;
        let carrier = C::from_polar(antinode, -kb * (start - shot.h) / q / gradient);
        let sides = pairs(shot, 10.0 * length, |h, x, within| {
            // A hair to the right side of the bed.
            let depth_m =
                if within { x.min(h) / q * (1.0 - 1e-12) } else { x.max(h) / q * (1.0 + 1e-12) };
            cut_off.pressure_uniform(range_m, depth_m).unwrap().value * carrier
        });
        // Nothing is fitted: without and with the phase of second order, as seen in scaled units.
        for side in &sides {
            let seen = error(side, C::from(1.0));
            assert!(seen < 0.6 * eps, "eps {eps}: {seen}");
            let seen = error(side, C::from_polar(1.0, 0.47 * eps));
            assert!(seen < 2e-3, "eps {eps}: {seen}");
        }
    }
}
