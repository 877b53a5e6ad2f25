//! What users ask of a passage: profiles of their own, slabs, wells, beams, sources, sensitivities, refusals.

#[path = "support/sea.rs"]
mod sea;

use merging_saddles::guide::{
    AcousticGuide, Passage, Polarization, Profile, QuantumWell, Slab, SlabGuide, TwoLayer,
};
use merging_saddles::{Complex64 as C, Error};
use sea::{SEA, bay, depth};
use std::f64::consts::{PI, TAU};

const CHIP: Slab = Slab {
    vacuum_wavelength_nm: 1550.0,
    core_index: 1.475,
    cladding_index: 1.444,
    polarization: Polarization::Te,
};

#[test]
fn samples_and_function_give_one_field() {
    let guide = AcousticGuide::new(SEA).unwrap();
    let ranges: Vec<f64> = (0..=44).map(|j| 50.0 * f64::from(j)).collect();
    let depths: Vec<f64> = ranges.iter().map(|&s| depth(s).0).collect();
    let sampled = guide.along(2, Profile::from_samples(&ranges, &depths).unwrap(), 0.0).unwrap();
    let exact = guide.along(2, bay(), 0.0).unwrap();
    assert!((sampled.cutoff_range_m() - exact.cutoff_range_m()).abs() < 0.5);
    let (cut, length) = (exact.cutoff_range_m(), exact.layer_range_m());
    for t in [-1.5, 0.0, 1.0, 2.0] {
        let range = cut + t * length;
        for share in [0.4, 1.2] {
            let place = share * exact.depth_m(range);
            let a = sampled.pressure_uniform(range, place).unwrap().value;
            let b = exact.pressure_uniform(range, place).unwrap().value;
            // Depths of the cubics are within a centimetre or two of the function's.
            assert!((a / b - 1.0).norm() < 0.02, "t {t} share {share}: {a} {b}");
        }
    }
}

#[test]
fn a_straight_function_is_a_plane() {
    let guide = AcousticGuide::new(SEA).unwrap();
    let line = Profile::from_fn(0.0, 2000.0, |s| (55.0 - 0.025 * s, -0.025)).unwrap();
    let a = guide.along(2, line, 0.0).unwrap();
    let b = guide.along(2, Profile::plane(55.0, 0.025).unwrap(), 0.0).unwrap();
    assert!(a.passage().fit_departure() < 1e-9);
    for (range, depth) in [(900.0, 12.0), (1150.0, 30.0), (1400.0, 60.0)] {
        let (a, b) =
            (a.pressure_uniform(range, depth).unwrap(), b.pressure_uniform(range, depth).unwrap());
        assert!((a.value / b.value - 1.0).norm() < 1e-8, "{} {}", a.value, b.value);
    }
}

#[test]
fn the_forms_join() {
    // The adiabatic mode where the fit begins, the saddles against the yardstick.
    let guide = AcousticGuide::new(TwoLayer { frequency_hz: 400.0, ..SEA }).unwrap();
    let run = guide.along(3, bay(), 500.0).unwrap();
    let passage = run.passage();
    let start = passage.fitted_from() + 1.0;
    let depth = 0.3 * run.depth_m(start);
    let a = passage.adiabatic(start, depth).unwrap();
    let u = passage.field(start, depth).unwrap().value;
    println!("eps {} fit {:.1e}: {a} {u}", run.eps(), passage.fit_departure());
    assert!((a / u - 1.0).norm() < 1.5 * run.eps());
    // The same from just before, where `value` changes over.
    let before = passage.value(passage.fitted_from() - 1e-6, depth).unwrap();
    let after = passage.value(passage.fitted_from() + 1e-6, depth).unwrap();
    assert!((before / after - 1.0).norm() < 1.5 * run.eps());
    let cut = run.cutoff_range_m();
    let (mut sharp, mut total) = (0, 0);
    for t in [-1.5, -0.5, 0.0, 0.5, 1.5] {
        let range = cut + t * run.layer_range_m();
        for share in [0.4, 1.0, 1.3] {
            let x = share * run.depth_m(range);
            let (exact, got) =
                (passage.field(range, x).unwrap(), passage.field_at_saddles(range, x));
            total += 1;
            // A refusal is allowed, a figure that does not cover is not.
            let Ok(got) = got else { continue };
            assert!((got.value - exact.value).norm() <= got.error + exact.error, "t {t} {share}");
            sharp += i32::from(got.relative_error < 1e-4);
        }
    }
    println!("{sharp} of {total} sharp at the saddles");
    assert!(2 * sharp > total);
}

#[test]
fn slabs_in_both_polarizations() {
    let te = SlabGuide::new(CHIP).unwrap();
    let tm = SlabGuide::new(Slab { polarization: Polarization::Tm, ..CHIP }).unwrap();
    // V = j pi/2 for both (textbook slab relation).
    let vacuum = TAU / 1550.0 * (1.475f64.powi(2) - 1.444f64.powi(2)).sqrt();
    for index in 1..6 {
        let half = te.cutoff_half_width_nm(index).unwrap();
        assert!((vacuum * half - f64::from(index) * 0.5 * PI).abs() < 1e-12);
        assert_eq!(tm.cutoff_half_width_nm(index).unwrap(), half);
        assert_eq!(te.mode_count(half * 1.0001).unwrap(), index + 1);
        assert_eq!(te.mode_count(half * 0.9999).unwrap(), index);
    }
    // Weak guidance: the polarizations differ by a few per cent, on modes of both parities.
    for index in [1, 2, 3] {
        let half = te.cutoff_half_width_nm(index).unwrap();
        let taper = Profile::plane(half + 800.0, 0.002).unwrap();
        let [a, b] = [te, tm].map(|g| g.along(index, taper.clone(), 0.0).unwrap());
        for t in [-1.0, 0.0, 1.0] {
            let range = a.cutoff_range() + t * a.layer_range();
            let x = 0.5 * a.profile().width(range);
            let (a, b) = (a.field(range, x).unwrap().value, b.field(range, x).unwrap().value);
            let apart = (a.norm() / b.norm() - 1.0).abs();
            assert!(apart > 1e-5 && apart < 0.05, "mode {index} t {t}: {apart}");
        }
    }
}

#[test]
fn strong_contrast_in_tm_is_refused_with_its_reason() {
    // Silicon in silica: m = (3.48/1.444)^2 = 5.8.
    let chip = Slab { core_index: 3.48, polarization: Polarization::Tm, ..CHIP };
    let guide = SlabGuide::new(chip).unwrap();
    let half = guide.cutoff_half_width_nm(1).unwrap();
    let leak = guide.along(1, Profile::plane(1.6 * half, 0.02).unwrap(), 0.0).unwrap();
    let refused = leak.field(leak.cutoff_range(), half).unwrap_err().to_string();
    assert!(refused.contains("Brewster") && refused.contains("0.17"), "{refused}");
    // TE has no such angle.
    let te = SlabGuide::new(Slab { polarization: Polarization::Te, ..chip }).unwrap();
    let leak = te.along(1, Profile::plane(1.6 * half, 0.02).unwrap(), 0.0).unwrap();
    assert!(leak.field(leak.cutoff_range(), half).is_ok());
}

#[test]
fn scales_do_not_matter() {
    // By the one-way equation a slab in TE is a quantum well with the range as time: the same figures in scaled units.
    let guide = SlabGuide::new(CHIP).unwrap();
    let half = guide.cutoff_half_width_nm(1).unwrap();
    let q = 0.5 * PI / half;
    let slope = 0.002;
    let leak = guide.along(1, Profile::plane(2.0 * half, slope).unwrap(), 0.0).unwrap();
    let leak = leak.paraxial().unwrap();
    let k = TAU / 1550.0 * 1.444;
    let speed = 2.0 * k * slope / q;
    let well = QuantumWell.along(1, Profile::plane(PI, speed).unwrap(), 0.0).unwrap();
    let at = |p: &Passage, t: f64, share: f64| {
        let range = p.cutoff_range() + t * p.layer_range();
        p.field(range, share * p.profile().width(range)).unwrap().value.norm()
    };
    for (t, share) in [(-1.0, 0.5), (0.0, 1.1), (1.0, 3.0)] {
        assert!((at(&leak, t, share) / at(&well, t, share) - 1.0).abs() < 1e-9);
    }
}

#[test]
fn a_beam_has_an_axis_a_width_and_a_footprint() {
    let guide = AcousticGuide::new(SEA).unwrap();
    // The gentler the slope, the nearer the beam is to that of the layer: 4 p^2 exp(-(4/3) p^3), half its
    // maximum at p = 0.4228 and 1.1701 (derived relation, solved by bisection here).
    let half = |mut inner: f64, mut outer: f64| {
        let density = |p: f64| 4.0 * p * p * (-4.0 / 3.0 * p.powi(3)).exp();
        for _ in 0..60 {
            let middle = 0.5 * (inner + outer);
            if density(middle) > 0.5 * density(0.5f64.cbrt()) {
                inner = middle
            } else {
                outer = middle
            }
        }
        inner
    };
    let run = guide.upslope(1, 1e-6, 20.0).unwrap();
    let beam = run.passage().beam().unwrap();
    let scale = run.take_off_angle_small_rad() / 0.5f64.cbrt();
    let expected = [half(0.79, 0.0), half(0.79, 3.0)];
    assert!((beam.axis_rad / run.take_off_angle_small_rad() - 1.0).abs() < 0.02);
    for (seen, expected) in beam.half_power_rad.iter().zip(expected) {
        assert!((seen / (expected * scale) - 1.0).abs() < 0.02, "{seen} {}", expected * scale);
    }
    // The footprint: the level on the axis's crossing beats those of the two edges by about 3 dB.
    let run = guide.upslope(1, 0.003, 20.0).unwrap();
    let passage = run.passage();
    let print = passage.footprint(120.0).unwrap();
    assert!(print.half_power[0] < print.axis && print.axis < print.half_power[1]);
    let line = [print.half_power[0], print.axis, print.half_power[1]].map(|s| (s, 120.0));
    let levels: Vec<f64> = passage.levels_db(&line).into_iter().map(Result::unwrap).collect();
    println!("{print:?} {levels:?}");
    assert!(levels[1] > levels[2] && levels[1] > levels[0] - 3.0);
    assert!(passage.footprint(5.0).is_err());
}

#[test]
fn a_source_is_the_sum_of_its_modes() {
    // In a flat sea, nearly: the textbook sum of modes on a bed that falls by 1e-6.
    let guide = AcousticGuide::new(SEA).unwrap();
    let flat = Profile::from_fn(0.0, 5000.0, |s| (40.0 - 1e-6 * s, -1e-6)).unwrap();
    let source = guide.source(flat, 0.0, 15.0).unwrap();
    assert_eq!(source.mode_count(), 2);
    let (kw, kb) = (guide.water_wavenumber(), guide.bottom_wavenumber().re);
    let (q, m, h) = ((kw * kw - kb * kb).sqrt(), guide.density_ratio(), 40.0);
    let (range, depth) = (2000.0, 25.0);
    let mut sum = C::from(0.0);
    for n in 1..=2 {
        let n = f64::from(n);
        // kappa cot(kappa h) = -m gamma by bisection.
        let (mut low, mut high) = ((n - 0.5) * PI / h, (n * PI / h).min(q));
        for _ in 0..80 {
            let k = 0.5 * (low + high);
            if k / (k * h).tan() + m * (q * q - k * k).max(0.0).sqrt() > 0.0 {
                low = k
            } else {
                high = k
            }
        }
        let k = 0.5 * (low + high);
        let gamma = (q * q - k * k).sqrt();
        let norm =
            0.5 * h - (2.0 * k * h).sin() / (4.0 * k) + m * (k * h).sin().powi(2) / (2.0 * gamma);
        let along = (kw * kw - k * k).sqrt();
        sum += C::from_polar(
            (k * 15.0).sin() * (k * depth).sin() / norm / along.sqrt(),
            along * range,
        );
    }
    let expected = sum * C::from_polar((TAU / range).sqrt(), 0.25 * PI);
    let seen = source.pressure(range, depth).unwrap();
    assert!((seen / expected - 1.0).norm() < 2e-3, "{seen} {expected}");
    let loss = source.transmission_loss_db(range, depth).unwrap();
    assert!((loss + 20.0 * expected.norm().log10()).abs() < 0.1);
    assert!(guide.source(bay(), 0.0, 60.0).is_err() && guide.source(bay(), -1.0, 10.0).is_err());
}

#[test]
fn a_launched_field_is_the_sum_of_its_modes() {
    // In a guide that is nearly straight: the textbook mode of V = q a, by bisection of
    // kappa tan(kappa a) = m gamma (even) or -kappa cot(kappa a) = m gamma (odd).
    for polarization in [Polarization::Te, Polarization::Tm] {
        let slab = Slab { polarization, ..CHIP };
        let guide = SlabGuide::new(slab).unwrap();
        let width = 2.6 * guide.cutoff_half_width_nm(1).unwrap();
        let q = 2.6 * 0.5 * PI / width;
        let k = TAU / slab.vacuum_wavelength_nm * slab.cladding_index;
        let m = match polarization {
            Polarization::Te => 1.0,
            Polarization::Tm => (slab.core_index / slab.cladding_index).powi(2),
        };
        let mode = |index: u32| {
            let least = f64::from(index) * 0.5 * PI / width;
            let (mut low, mut high) = (least, (least + 0.5 * PI / width * (1.0 - 1e-9)).min(q));
            let excess = |kappa: f64| {
                let angle = kappa * width - f64::from(index) * 0.5 * PI;
                kappa * angle.tan() - m * (q * q - kappa * kappa).max(0.0).sqrt()
            };
            for _ in 0..80 {
                let middle = 0.5 * (low + high);
                if excess(middle) < 0.0 { low = middle } else { high = middle }
            }
            let gamma = (q * q - low * low).sqrt();
            let shape = move |x: f64| {
                let side = if index % 2 == 1 && x < 0.0 { -1.0 } else { 1.0 };
                let across =
                    |x: f64| if index % 2 == 1 { (low * x).sin() } else { (low * x).cos() };
                let x = x.abs();
                side * across(x.min(width)) * (-gamma * (x - width).max(0.0)).exp()
            };
            (gamma, shape)
        };
        let flat = Profile::from_fn(0.0, 1e6, move |s| (width - 1e-7 * s, -1e-7)).unwrap();
        let ((g0, m0), (g1, m1), (g2, m2)) = (mode(0), mode(1), mode(2));
        let turn = C::new(0.6, 0.8);
        let light = guide.launch(flat, 0.0, |x| m0(x) + turn * m1(x) - 2.0 * m2(x)).unwrap();
        let amplitudes = [C::from(1.0), turn, C::from(-2.0)];
        // Each mode's norm by the midpoint rule.
        for ((index, energy), a) in light.energies().zip(amplitudes) {
            let own = |x: f64| [m0(x), m1(x), m2(x)][index as usize].powi(2);
            let weighted = |x: f64| own(x) * if x < width { 1.0 } else { m };
            let step = width / 4000.0;
            let sum: f64 = (0..80_000).map(|j| weighted((f64::from(j) + 0.5) * step) * step).sum();
            let exact = 2.0 * sum * a.norm_sqr();
            assert!((energy / exact - 1.0).abs() < 1e-5, "mode {index}: {energy} {exact}");
        }
        for (range, x) in [(0.0, -900.0), (0.0, 1.3 * width), (2e4, 700.0), (3e4, -1.1 * width)] {
            let parts = [(g0, m0(x)), (g1, m1(x)), (g2, m2(x))];
            let carried = parts.iter().zip(amplitudes).map(|((gamma, shape), a)| {
                a * C::from_polar(1.0, k.hypot(*gamma) * range) * *shape
            });
            let exact: C = carried.sum();
            let seen = light.value(range, x).unwrap();
            assert!((seen - exact).norm() < 2e-3, "{range} {x}: {seen} {exact}");
        }
        assert!((0..4).all(|index| light.passage(index).is_none()));
        assert!(light.value(2e6, 0.0).is_err() && light.value(f64::NAN, 0.0).is_err());
        assert!(light.value(0.0, f64::NAN).is_err());
    }
    let state =
        QuantumWell.launch(Profile::plane(3.5, 0.01).unwrap(), 0.0, |x| C::from((-x * x).exp()));
    let state = state.unwrap();
    assert!(state.passage(0).is_none() && state.passage(3).is_none());
    assert!((state.passage(2).unwrap().cutoff_width() - PI).abs() < 1e-12);
    let refused = |range: f64, field: fn(f64) -> C| {
        QuantumWell
            .launch(Profile::plane(3.5, 0.01).unwrap(), range, field)
            .err()
            .map(|e| e.to_string())
    };
    assert!(refused(400.0, |_| C::from(1.0)).unwrap().contains("range of the launch"));
    assert!(refused(0.0, |x| C::from(1.0 / (x - x))).unwrap().contains("field of the launch"));
    assert!(refused(0.0, |x| C::from((1e9 * x).sin())).unwrap().contains("did not converge"));
}

#[test]
fn a_ridge_cuts_modes_off_although_it_is_deep_behind() {
    let guide = AcousticGuide::new(SEA).unwrap();
    let ridge = Profile::from_fn(0.0, 3000.0, |s| {
        let x = (s - 1800.0) / 700.0;
        (60.0 - 40.0 * (-x * x).exp(), 80.0 * x * (-x * x).exp() / 700.0)
    })
    .unwrap();
    // Cut-off depths 9, 27, 45 m (textbook modal relation); the crest lies in 20 m.
    let modes: Vec<u32> = guide.cutoffs(&ridge).unwrap().iter().map(|(mode, _)| *mode).collect();
    assert_eq!(modes, [3, 2]);
    // Short of the crest the source's modes 2 and 3 are those that leave.
    let source = guide.source(ridge, 0.0, 25.0).unwrap();
    assert_eq!((source.mode_count(), source.cut_off_modes().count()), (3, 2));
}

#[test]
fn attenuation_in_the_water_attenuates() {
    // Far before cut-off nearly all the energy is in the water: dB per wavelength of the water.
    let sea = TwoLayer { frequency_hz: 1000.0, water_attenuation_db_per_wavelength: 0.1, ..SEA };
    let run = AcousticGuide::new(sea).unwrap().upslope(1, 0.002, 12.0).unwrap();
    let passage = run.passage();
    let from = (run.cutoff_depth_m() - 12.0) / 0.002f64.tan();
    let [a, b] =
        [from, from + 150.0].map(|s| passage.adiabatic(s, 0.5 * run.depth_m(s)).unwrap().norm());
    let seen = 20.0 * (a / b).log10() / (150.0 / 1.5);
    println!("{seen} dB per wavelength");
    assert!((seen - 0.1).abs() < 0.02, "{seen}");
}

#[test]
fn losses_are_those_of_the_modes() {
    // Textbook perturbation of a mode's wavenumber: Im k_n = integral of k k'' psi^2/rho / (k_n integral of psi^2/rho),
    // on a bed so gentle that the depth is the same over the distance. kappa cot(kappa h) = -m gamma by bisection.
    let (depth, slope) = (40.0, 1e-5);
    for (water, bottom) in [(0.0, 0.2), (0.1, 0.0)] {
        let sea = TwoLayer {
            water_attenuation_db_per_wavelength: water,
            bottom_attenuation_db_per_wavelength: bottom,
            ..SEA
        };
        let guide = AcousticGuide::new(sea).unwrap();
        let (kw, kb) = (guide.water_wavenumber(), guide.bottom_wavenumber().re);
        let (q, m) = ((kw * kw - kb * kb).sqrt(), guide.density_ratio());
        let (mut low, mut high) = (0.5 * PI / depth, PI / depth);
        for _ in 0..80 {
            let k = 0.5 * (low + high);
            if k / (k * depth).tan() + m * (q * q - k * k).max(0.0).sqrt() > 0.0 {
                low = k
            } else {
                high = k
            }
        }
        let gamma = (q * q - low * low).sqrt();
        let inside = 0.5 * depth - (2.0 * low * depth).sin() / (4.0 * low);
        let outside = m * (low * depth).sin().powi(2) / (2.0 * gamma);
        let along = (kw * kw - low * low).sqrt();
        let loss = |db: f64| db / (40.0 * PI * std::f64::consts::LOG10_E);
        let expected = (kw * kw * loss(water) * inside + kb * kb * loss(bottom) * outside)
            / (along * (inside + outside));
        let run = guide.upslope(1, slope, depth).unwrap();
        let from = (run.cutoff_depth_m() - depth) / slope.tan();
        let to = from + 500.0;
        let loss = |passage: &Passage| {
            let [a, b] = [from, to].map(|s| passage.adiabatic(s, 0.4 * depth).unwrap().norm());
            (a / b).ln() / 500.0
        };
        let narrow = run.passage().clone().paraxial().unwrap();
        let (seen, without) = (loss(run.passage()), loss(&narrow));
        println!(
            "{water} {bottom}: {seen:.3e} (one-way {without:.3e}), expected {expected:.3e} Np/m"
        );
        assert!((seen / expected - 1.0).abs() < 0.02);
        // The one-way equation is far off where the bottom alone is lossy.
        assert!(water > 0.0 || without < 0.0);
    }
}

#[test]
fn fast_and_bent_profiles_are_refused_with_eps() {
    let guide = AcousticGuide::new(SEA).unwrap();
    let cliff = guide.along(2, Profile::plane(60.0, 0.5).unwrap(), 0.0).unwrap_err().to_string();
    assert!(cliff.contains("eps"), "{cliff}");
    // A ledge just at the cut-off depth.
    let depth = guide.cutoff_depth_m(2).unwrap();
    let ledge = Profile::from_fn(0.0, 2000.0, move |s| {
        let x = (s - 1000.0) / 15.0;
        (depth - 6.0 * x.tanh() - 0.0005 * (s - 1000.0), -0.4 / x.cosh().powi(2) - 0.0005)
    });
    let bent = guide.along(2, ledge.unwrap(), 0.0);
    let bent = bent.unwrap_err().to_string();
    println!("{bent}");
    assert!(bent.contains("eps") || bent.contains("narrows"), "{bent}");
    let flat = Profile::from_samples(&[0.0, 500.0, 1000.0], &[60.0, 27.5, 26.9]).unwrap();
    let short = guide.along(2, flat, 0.0);
    println!("{:?}", short.as_ref().err().map(ToString::to_string));
    for (ranges, depths) in [
        (&[0.0, 1.0][..], &[3.0, 2.0][..]),
        (&[0.0, 2.0, 1.0], &[3.0, 2.0, 1.0]),
        (&[0.0, 1.0, 2.0], &[3.0, f64::NAN, 1.0]),
        (&[0.0, 1.0, 2.0], &[3.0, 2.0, -1.0]),
    ] {
        assert!(matches!(Profile::from_samples(ranges, depths), Err(Error::Domain { .. })));
    }
    assert!(Profile::plane(-1.0, 0.1).is_err() && Profile::plane(1.0, f64::NAN).is_err());
    assert!(Profile::from_fn(1.0, 0.0, |_| (1.0, 0.0)).is_err());
    // A function that returns NaN is no crash and no silent value.
    let broken = Profile::from_fn(0.0, 1000.0, |_| (f64::NAN, f64::NAN)).unwrap();
    assert!(guide.cutoffs(&broken).is_err() && guide.source(broken.clone(), 0.0, 5.0).is_err());
    assert!(SlabGuide::new(CHIP).unwrap().cutoffs(&broken).is_err());
    assert!(QuantumWell.launch(broken.clone(), 0.0, C::from).is_err());
    assert!(guide.along(1, broken, 0.0).is_err());
    assert!(guide.along(0, bay(), 0.0).is_err() && guide.along(2, bay(), 1e6).is_err());
    assert!(QuantumWell.along(0, Profile::plane(3.0, 0.01).unwrap(), 0.0).is_err());
    assert!(SlabGuide::new(Slab { core_index: 1.4, ..CHIP }).is_err());
    assert!(SlabGuide::new(CHIP).unwrap().cutoff_half_width_nm(0).is_err());
}
