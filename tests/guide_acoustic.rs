//! The two-layer sea: figures of the trade, refusals, losses, and the two formulas side by side.

#[path = "support/sea.rs"]
mod sea;

use merging_saddles::guide::{AcousticGuide, ModeCutOff, Order, Profile, TwoLayer, level_db};
use merging_saddles::{Complex64 as C, Error};
use sea::SEA;
use std::f64::consts::{PI, TAU};

fn cut_off(sea: TwoLayer, mode: u32, gradient: f64) -> ModeCutOff {
    let guide = AcousticGuide::new(sea).unwrap();
    let depth = guide.cutoff_depth_m(mode).unwrap();
    guide.upslope(mode, gradient.atan(), 1.8 * depth).unwrap()
}

#[test]
fn figures_of_the_worked_example() {
    // Mode 2 on a slope of 2 degrees; derived relations worked out by hand.
    let guide = AcousticGuide::new(SEA).unwrap();
    let (kw, kb) = (TAU * 100.0 / 1500.0, TAU * 100.0 / 1650.0);
    let gamma = (kw * kw - kb * kb) * 1.8 * 2f64.to_radians().tan();
    assert!((gamma - 1.913e-3).abs() < 2e-6);
    let mode = guide.upslope(2, 2f64.to_radians(), 60.0).unwrap();
    assert!((mode.cutoff_depth_m() - 1.5 * PI / (kw * kw - kb * kb).sqrt()).abs() < 1e-9);
    assert!((mode.layer_height_m() - (2.0 * kb * gamma).powf(-1.0 / 3.0)).abs() < 1e-12);
    assert!((mode.take_off_angle_small_rad() - (gamma / (kb * kb)).cbrt()).abs() < 1e-12);
    assert!((mode.take_off_angle_small_rad() - 0.236).abs() < 5e-4);
    assert!((mode.take_off_angle_rad().unwrap() - 0.236f64.asin()).abs() < 6e-4);
    // No frequency and no mode number in the angle and in eps.
    for (frequency_hz, n) in [(25.0, 1), (800.0, 7)] {
        let guide = AcousticGuide::new(TwoLayer { frequency_hz, ..SEA }).unwrap();
        let other = guide.upslope(n, 2f64.to_radians(), 1e4).unwrap();
        let angles = (other.take_off_angle_small_rad(), mode.take_off_angle_small_rad());
        assert!((angles.0 - angles.1).abs() < 1e-12 && (other.eps() - mode.eps()).abs() < 1e-12);
    }
    // eps = 0.19 for 1 in 20 with 1500 over 1700 m/s.
    let steep = cut_off(TwoLayer { bottom_speed_m_per_s: 1700.0, ..SEA }, 1, 0.05);
    assert!((steep.eps() - 0.19).abs() < 0.005, "{}", steep.eps());
}

#[test]
fn modes_are_counted_and_cut_off_in_turn() {
    let guide = AcousticGuide::new(SEA).unwrap();
    for mode in 1..20 {
        let depth = guide.cutoff_depth_m(mode).unwrap();
        assert_eq!(guide.mode_count(depth * (1.0 - 1e-9)).unwrap(), mode - 1);
        assert_eq!(guide.mode_count(depth * (1.0 + 1e-9)).unwrap(), mode);
    }
    // A curved profile, first place only.
    let profile = Profile::from_fn(0.0, 3000.0, |s| {
        (60.0 - 40.0 * (s / 1000.0).sin(), -0.04 * (s / 1000.0).cos())
    })
    .unwrap();
    let place = guide.cutoff_place(2, &profile).unwrap();
    let range = 1000.0 * ((60.0 - guide.cutoff_depth_m(2).unwrap()) / 40.0).asin();
    assert!((place.range_m - range).abs() < 1e-6);
    assert!((place.slope_rad.tan() - 0.04 * (range / 1000.0).cos()).abs() < 1e-6);
    let never = guide.cutoff_place(1, &profile).unwrap_err().to_string();
    assert!(never.contains("stays wider") && never.contains("3000"), "{never}");
    let before = guide.cutoff_place(4, &profile).unwrap_err().to_string();
    assert!(before.contains("at range 0 already"), "{before}");
}

#[test]
fn a_decibel_per_wavelength_is_one() {
    let sea = TwoLayer { bottom_attenuation_db_per_wavelength: 1.0, ..SEA };
    let k = AcousticGuide::new(sea).unwrap().bottom_wavenumber();
    let over_one_wavelength = (C::new(0.0, 1.0) * k * (TAU / k.re)).exp();
    assert!((level_db(over_one_wavelength) + 1.0).abs() < 1e-12);
}

#[test]
fn the_two_formulas_agree_at_cut_off() {
    // The layer is the leading term in eps^(1/3).
    let differences = |loss: f64, gradient: f64| {
        let sea = TwoLayer { bottom_attenuation_db_per_wavelength: loss, ..SEA };
        let mode = cut_off(sea, 1, gradient);
        let (water, along, up) =
            (mode.cutoff_depth_m(), mode.layer_range_m(), mode.layer_height_m());
        [(0.0, water), (0.5 * along, 0.5 * water), (0.5 * along, water + 2.0 * up)].map(|(s, z)| {
            let layer = mode.pressure_layer(s, z).unwrap();
            (layer / mode.pressure_uniform(s, z).unwrap().value - 1.0).norm()
        })
    };
    let (steep, gentle) = (differences(0.0, 1e-3), differences(0.0, 1e-6));
    for (a, b) in steep.into_iter().zip(gentle) {
        assert!(b < 0.02 && a / b > 7.0, "{a} {b}");
    }
    // Loss moves cut-off off the real range, by more of the layer's length the gentler the slope.
    for loss in [0.05, 0.1] {
        let seen = differences(loss, 1e-3);
        assert!(seen.iter().all(|&d| d < 0.25), "loss {loss}: {seen:?}");
    }
}

#[test]
fn bottom_loss_attenuates_the_mode_at_its_textbook_rate() {
    // d ln|p|/ds = -Im of the local modal wavenumber (k_b^2 + (q gamma)^2)^(1/2), kappa cot(kappa q h) = -m gamma
    // (textbook modal relation).
    let sea = TwoLayer { bottom_attenuation_db_per_wavelength: 0.6, ..SEA };
    let (gradient, kw) = (2e-4, TAU * 100.0 / 1500.0);
    let mode = cut_off(sea, 1, gradient);
    let guide = AcousticGuide::new(sea).unwrap();
    let k = guide.bottom_wavenumber();
    let q = (kw * kw - k * k).sqrt();
    let rate = |depth: f64| {
        // Newton from the loss-free side, in kappa.
        let m = guide.density_ratio();
        let mut kappa = C::new(0.8, 0.0);
        for _ in 0..200 {
            let f =
                |x: C| x * (x * q * depth).cos() + (1.0 - x * x).sqrt() * (x * q * depth).sin() * m;
            let slope = (f(kappa + 1e-6) - f(kappa - 1e-6)) / 2e-6;
            kappa -= f(kappa) / slope * 0.5;
        }
        (k * k + (1.0 - kappa * kappa) * q * q).sqrt().im
    };
    // From 1.7 to 1.4 cut-off depths, by Simpson's rule over the depth.
    let (deep, shallow) = (1.7 * mode.cutoff_depth_m(), 1.4 * mode.cutoff_depth_m());
    let step = (deep - shallow) / 20.0;
    let sum: f64 = (0..=20)
        .map(|j| {
            let weight = if j == 0 || j == 20 {
                1.0
            } else if j % 2 == 1 {
                4.0
            } else {
                2.0
            };
            weight * rate(shallow + step * f64::from(j))
        })
        .sum();
    let expected = sum * step / 3.0 / gradient;
    // The antinode, less the change of the mode's own shape.
    let ln_antinode = |sea: TwoLayer, depth: f64| {
        let mode = cut_off(sea, 1, gradient);
        let range = (mode.cutoff_depth_m() - depth) / gradient;
        (1..40)
            .map(|j| {
                mode.pressure_uniform(range, depth * f64::from(j) / 40.0).unwrap().scaled.ln_norm()
            })
            .fold(f64::NEG_INFINITY, f64::max)
    };
    let clear = TwoLayer { bottom_attenuation_db_per_wavelength: 0.0, ..sea };
    let loss = |depth| ln_antinode(sea, depth) - ln_antinode(clear, depth);
    let seen = loss(deep) - loss(shallow);
    println!("seen {seen}, expected {expected}");
    assert!(expected > 0.5 && (seen / expected - 1.0).abs() < 0.02, "{seen} {expected}");
}

#[test]
fn the_beam_leaves_at_the_take_off_angle() {
    // The layer's beam lies along y = 2^(2/3) t (derived relation); small eps, well after cut-off.
    let mode = cut_off(SEA, 1, 1e-4);
    let range = 12.0 * mode.layer_range_m();
    let bed = mode.depth_m(range);
    let level =
        |angle: f64| level_db(mode.pressure_uniform(range, bed + range * angle).unwrap().value);
    let angle = mode.take_off_angle_small_rad();
    let best =
        (1..40).map(|j| angle * 0.05 * f64::from(j)).max_by(|a, b| level(*a).total_cmp(&level(*b)));
    let best = best.unwrap() / angle;
    assert!((best - 1.0).abs() < 0.11, "{best}");
}

#[test]
fn the_incoming_mode_has_level_zero_at_its_reference() {
    for (loss, order) in [(0.0, Order::Next), (0.3, Order::Next), (0.0, Order::Leading)] {
        let sea = TwoLayer { bottom_attenuation_db_per_wavelength: loss, ..SEA };
        let mode = cut_off(sea, 2, 5e-4).order(order);
        let depth = 1.8 * mode.cutoff_depth_m();
        let range = (mode.cutoff_depth_m() - depth) / 5e-4;
        let antinode = (1..100)
            .map(|j| mode.pressure_uniform(range, depth * f64::from(j) / 100.0).unwrap().value)
            .max_by(|a, b| a.norm().total_cmp(&b.norm()))
            .unwrap();
        assert!(level_db(antinode).abs() < 0.05, "loss {loss}: {}", level_db(antinode));
    }
}

#[test]
fn refusals_name_the_figure_and_the_cure() {
    let refuse = |sea: TwoLayer| AcousticGuide::new(sea).unwrap_err().to_string();
    let slow = refuse(TwoLayer { bottom_speed_m_per_s: 1450.0, ..SEA });
    assert!(
        slow.contains("bottom_speed_m_per_s = 1450") && slow.contains("traps no mode"),
        "{slow}"
    );
    assert!(refuse(TwoLayer { frequency_hz: 0.0, ..SEA }).contains("frequency_hz"));
    assert!(refuse(TwoLayer { water_speed_m_per_s: f64::NAN, ..SEA }).contains("water_speed"));
    assert!(refuse(TwoLayer { water_density_kg_per_m3: -1.0, ..SEA }).contains("water_density"));
    assert!(refuse(TwoLayer { bottom_density_kg_per_m3: 0.0, ..SEA }).contains("bottom_density"));
    for attenuation in [-0.1, 40.0, f64::NAN] {
        let sea = TwoLayer { bottom_attenuation_db_per_wavelength: attenuation, ..SEA };
        assert!(refuse(sea).contains("attenuation"));
    }
    let guide = AcousticGuide::new(SEA).unwrap();
    assert!(guide.cutoff_depth_m(0).is_err() && guide.mode_count(-3.0).is_err());
    assert!(guide.upslope(1, -0.01, 60.0).unwrap_err().to_string().contains("slope_rad"));
    assert!(guide.upslope(1, 0.6, 60.0).unwrap_err().to_string().contains("eps"));
    assert!(guide.upslope(1, 0.02, 5.0).unwrap_err().to_string().contains("reference_depth_m"));
    let mode = guide.upslope(1, 0.02, 60.0).unwrap();
    for (range, depth) in [(0.0, -1.0), (1e5, 1.0), (f64::NAN, 1.0), (0.0, f64::INFINITY)] {
        assert!(mode.pressure_layer(range, depth).is_err());
        assert!(matches!(mode.pressure_uniform(range, depth), Err(Error::Domain { .. })));
    }
}
