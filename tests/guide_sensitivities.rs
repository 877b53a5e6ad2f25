//! Derivatives of results, and whether their error figures cover: closed forms, identities of scale, noise, jumps.

#[path = "support/mixing.rs"]
mod mixing;
#[path = "support/sea.rs"]
mod sea;

use merging_saddles::Error;
use merging_saddles::guide::{
    AcousticGuide, Derivative, Figure, Figures, Polarization, Profile, QuantumWell, Slab,
    SlabGuide, TwoLayer, level_db, sensitivities,
};
use mixing::Random;
use sea::bay;

const SEA: TwoLayer = TwoLayer { bottom_attenuation_db_per_wavelength: 0.3, ..sea::SEA };

/// One figure of the caller's own.
#[derive(Clone, Copy, Debug)]
struct One<T = f64> {
    x: T,
}

impl Figures for One {
    type Of<T> = One<T>;

    fn map<T>(&self, mut f: impl FnMut(Figure) -> Result<T, Error>) -> Result<One<T>, Error> {
        Ok(One { x: f(Figure::new(self.x, self.x))? })
    }
}

fn one(x: f64, f: impl Fn(f64) -> f64) -> Derivative {
    let any = Profile::plane(1.0, 1.0).unwrap();
    sensitivities(&One { x }, &any, |one, _| Ok(f(one.x))).unwrap().per.x
}

/// Uncovered share and median of figure over error.
fn tally(name: &str, cases: impl Iterator<Item = (Derivative, f64)>) -> (usize, f64) {
    let (mut ratios, mut uncovered) = (vec![], 0);
    for (got, exact) in cases {
        let error = (got.value - exact).abs();
        // The exact derivative is rounded, too.
        if error > got.error + 1e-15 * exact.abs() {
            println!("{name}: error {error:.1e}, figure {:.1e} of {exact:.2e}", got.error);
            uncovered += 1;
        }
        if error > 0.0 {
            ratios.push(got.error / error);
        }
    }
    ratios.sort_by(f64::total_cmp);
    let median = ratios[ratios.len() / 2];
    println!(
        "{name}: {} cases, {uncovered} uncovered, figure/error median {median:.1}",
        ratios.len()
    );
    (uncovered, median)
}

/// Noise that is a function of the figure, within -1 and 1.
fn noise(x: f64, seed: u64) -> f64 {
    Random(x.to_bits() ^ seed).within(-1.0, 1.0)
}

#[test]
fn smooth_results_are_exact_to_rounding() {
    let mut random = Random(1);
    let cases = (0..400).map(|_| {
        let (x, power) = (random.within(0.1, 1000.0), random.within(-3.0, 3.0));
        let got = one(x, |x| x.powf(power));
        let exact = power * x.powf(power - 1.0);
        assert!(got.error < 1e-11 * (exact.abs() + x.powf(power) / x), "{got:?} {exact}");
        (got, exact)
    });
    let (uncovered, median) = tally("powers", cases);
    assert!(uncovered == 0 && median < 1e3);
}

#[test]
fn rapid_oscillations_are_not_taken_for_noise() {
    // A phase of up to 1e5 rad in the figure: what a transmission loss far from its source does.
    let mut random = Random(2);
    let cases = (0..400).map(|_| {
        let (x, phase) = (random.within(0.5, 2.0), 10f64.powf(random.within(0.0, 5.0)));
        let got = one(x, |x| (phase * x).sin() + 0.3 * x);
        assert!(got.error < 1e-6 * phase);
        // The phase itself is rounded, which turns the derivative.
        let rounding = f64::EPSILON * phase * phase * x;
        let got = Derivative { error: got.error + rounding, ..got };
        (got, phase * (phase * x).cos() + 0.3)
    });
    let (uncovered, median) = tally("oscillations", cases);
    assert!(uncovered == 0 && median < 1e4);
}

#[test]
fn noise_is_in_the_figure() {
    let mut random = Random(3);
    let cases = (0..1000).map(|j| {
        let (x, power) = (random.within(0.5, 2.0), random.within(-3.0, 3.0));
        let size = 10f64.powf(random.within(-13.0, -6.0));
        let got = one(x, |x| x.powf(power) * (1.0 + size * noise(x, j)));
        let exact = power * x.powf(power - 1.0);
        // Three times the noise, weighted by 64 over an eighth or a 32nd of the figure.
        assert!(got.error < 6e3 * size * x.powf(power) / x, "{got:?} {exact} {size}");
        (got, exact)
    });
    let (uncovered, median) = tally("noise", cases);
    assert!(uncovered <= 1 && median < 30.0);
    // Nothing but noise: no digit, and it says so.
    let got = one(1.0, |x| noise(x, 7));
    assert!(got.error.is_infinite() && got.value.is_finite(), "{got:?}");
}

#[test]
fn jumps_are_in_the_figure() {
    let mut random = Random(4);
    let cases = (0..1000).map(|_| {
        let x = random.within(0.5, 2.0);
        let place =
            x * (1.0 + 10f64.powf(random.within(-4.0, -0.9)) * random.within(-1.0, 1.0).signum());
        let size = 10f64.powf(random.within(-8.0, -1.0));
        let got = one(x, |x| (2.0 * x).exp() + if x > place { size } else { 0.0 });
        (got, 2.0 * (2.0 * x).exp())
    });
    let (uncovered, median) = tally("jumps", cases);
    assert!(uncovered <= 1 && median < 1e3);
}

#[test]
fn weak_contrast_costs_no_digits() {
    // Cut-off depth h = (n - 1/2) pi/q (textbook modal relation): dh/dc_w = h (omega^2/c_w^3)/q^2.
    let bed = Profile::plane(100.0, 0.02).unwrap();
    for bottom_speed_m_per_s in [3000.0, 1650.0, 1550.0, 1510.0, 1501.0] {
        let sea = TwoLayer { bottom_speed_m_per_s, ..SEA };
        let depth = |sea: &TwoLayer, _: &Profile| AcousticGuide::new(*sea)?.cutoff_depth_m(2);
        let s = sensitivities(&sea, &bed, depth).unwrap().per;
        let (water, bottom) = (1500f64.powi(-2), bottom_speed_m_per_s.powi(-2));
        let h = depth(&sea, &bed).unwrap() / (water - bottom);
        for (got, exact) in [
            (s.water_speed_m_per_s, h * water / 1500.0),
            (s.bottom_speed_m_per_s, -h * bottom / bottom_speed_m_per_s),
        ] {
            let error = (got.value / exact - 1.0).abs();
            println!("{bottom_speed_m_per_s}: {error:.1e}, figure {:.1e}", got.error / exact.abs());
            assert!((got.value - exact).abs() <= got.error && got.error < 1e-9 * exact.abs());
        }
        assert_eq!(
            s.bottom_density_kg_per_m3,
            Derivative { value: 0.0, ..s.bottom_density_kg_per_m3 }
        );
    }
}

/// Within the figures, and the sum of these.
fn vanishes(name: &str, parts: &[(f64, Derivative)]) -> f64 {
    let sum: f64 = parts.iter().map(|(x, d)| x * d.value).sum();
    let figure: f64 = parts.iter().map(|(x, d)| x * d.error).sum();
    let size = parts.iter().map(|(x, d)| (x * d.value).abs()).fold(0.0, f64::max);
    println!("{name}: {sum:.1e}, figures {figure:.1e}, largest part {size:.1e}");
    assert!(sum.abs() <= figure, "{name}: {sum} {figure}");
    figure / size
}

#[test]
fn a_sea_depends_on_ratios() {
    // Frequency and speeds scaled together leave the wavenumbers, densities their ratio: the sums of the
    // logarithmic derivatives vanish (Euler's theorem). A level by quadrature, on a plane and on a bay.
    type Quantity = fn(&TwoLayer, &Profile) -> Result<f64, Error>;
    let level: Quantity = |sea, bed| {
        let run = AcousticGuide::new(*sea)?.along(2, bed.clone(), 0.0)?;
        Ok(level_db(run.pressure_uniform(1300.0, 40.0)?.value))
    };
    let axis: Quantity = |sea, bed| {
        Ok(AcousticGuide::new(*sea)?.along(2, bed.clone(), 0.0)?.passage().beam()?.axis_rad)
    };
    let loss: Quantity = |sea, bed| {
        AcousticGuide::new(*sea)?.source(bed.clone(), 0.0, 20.0)?.transmission_loss_db(900.0, 15.0)
    };
    let plane = Profile::plane(52.0, 0.024).unwrap();
    for (name, quantity, bed, bar) in [
        ("level, bay", level, bay(), 1e-8),
        ("axis, plane", axis, plane.clone(), 1e-3),
        // Of a sum's values six digits are asked for; the noise of the rest is in the figures.
        ("loss, plane", loss, plane, 1e-5),
    ] {
        let per = sensitivities(&SEA, &bed, quantity).unwrap().per;
        let speeds = [
            (SEA.frequency_hz, per.frequency_hz),
            (SEA.water_speed_m_per_s, per.water_speed_m_per_s),
            (SEA.bottom_speed_m_per_s, per.bottom_speed_m_per_s),
        ];
        let densities = [
            (SEA.water_density_kg_per_m3, per.water_density_kg_per_m3),
            (SEA.bottom_density_kg_per_m3, per.bottom_density_kg_per_m3),
        ];
        assert!(vanishes(name, &speeds) < bar);
        assert!(vanishes(name, &densities) < bar);
    }
}

#[test]
fn a_slab_and_a_well_have_theirs() {
    let chip = Slab {
        vacuum_wavelength_nm: 1550.0,
        core_index: 1.475,
        cladding_index: 1.444,
        polarization: Polarization::Tm,
    };
    // V = j pi/2 at cut-off (textbook slab relation): width = j lambda/(4 (n1^2 - n2^2)^(1/2)), and the range
    // where a plane taper has it.
    let taper = Profile::plane(9000.0, 0.004).unwrap();
    let range = |slab: &Slab, taper: &Profile| {
        Ok(SlabGuide::new(*slab)?.along(2, taper.clone(), 0.0)?.cutoff_range())
    };
    let s = sensitivities(&chip, &taper, range).unwrap();
    let width = SlabGuide::new(chip).unwrap().cutoff_half_width_nm(2).unwrap();
    let square = 1.475f64.powi(2) - 1.444f64.powi(2);
    for (got, exact) in [
        (s.per.vacuum_wavelength_nm, -width / 1550.0 / 0.004),
        (s.per.core_index, width * 1.475 / square / 0.004),
        (s.per.cladding_index, -width * 1.444 / square / 0.004),
        (s.per_fall, (width - 9000.0) / 0.004f64.powi(2)),
        (s.per_width, 250.0),
    ] {
        assert!((got.value - exact).abs() <= got.error + 1e-15 * exact.abs(), "{got:?} {exact}");
        assert!(got.error < 1e-10 * exact.abs(), "{got:?} {exact}");
    }
    assert_eq!(s.per.polarization, Polarization::Tm);
    // Indices and wavelength scaled together leave the wavenumbers.
    let level = |slab: &Slab, taper: &Profile| {
        let leak = SlabGuide::new(*slab)?.along(2, taper.clone(), 0.0)?;
        Ok(level_db(leak.field(1e6, 3000.0)?.value))
    };
    let per = sensitivities(&chip, &taper, level).unwrap().per;
    let parts = [
        (chip.vacuum_wavelength_nm, per.vacuum_wavelength_nm),
        (chip.core_index, per.core_index),
        (chip.cladding_index, per.cladding_index),
    ];
    assert!(vanishes("slab", &parts) < 1e-9);
    // The time of release of a well whose walls, pi/2 apart from the middle then, close in at 0.01.
    let time =
        |well: &QuantumWell, walls: &Profile| Ok(well.along(1, walls.clone(), 0.0)?.cutoff_range());
    let s = sensitivities(&QuantumWell, &Profile::plane(3.5, 0.01).unwrap(), time).unwrap();
    let per_speed = -(3.5 - std::f64::consts::FRAC_PI_2) / 1e-4;
    assert!((s.per_fall.value - per_speed).abs() <= s.per_fall.error);
    assert!((s.per_width.value - 100.0).abs() <= s.per_width.error);
}

#[test]
fn a_profile_turns_about_its_first_range() {
    // Samples on a line: the same derivatives as those of the plane, about range 500 and about range 0.
    let ranges: Vec<f64> = (0..=16).map(|j| 500.0 + 100.0 * f64::from(j)).collect();
    let depths: Vec<f64> = ranges.iter().map(|s| 60.0 - 0.02 * s).collect();
    let track = Profile::from_samples(&ranges, &depths).unwrap();
    let range =
        |sea: &TwoLayer, bed: &Profile| Ok(AcousticGuide::new(*sea)?.cutoff_place(2, bed)?.range_m);
    let along = sensitivities(&SEA, &track, range).unwrap();
    let plane = sensitivities(&SEA, &Profile::plane(60.0, 0.02).unwrap(), range).unwrap();
    let about_zero = along.per_fall.value - 500.0 * along.per_width.value;
    assert!((about_zero / plane.per_fall.value - 1.0).abs() < 1e-8);
    assert!((along.per_width.value / plane.per_width.value - 1.0).abs() < 1e-10);
}

#[test]
fn refusals_round_the_figures() {
    let flat = Profile::plane(1.0, 1.0).unwrap();
    let at =
        |x: f64, f: fn(&One, &Profile) -> Result<f64, Error>| sensitivities(&One { x }, &flat, f);
    // Refused at the figure itself, or a result that is no number: the error is the quantity's.
    let never =
        at(1.0, |_, _| AcousticGuide::new(TwoLayer { frequency_hz: -1.0, ..SEA }).map(|_| 0.0));
    assert!(never.unwrap_err().to_string().contains("frequency_hz"));
    assert!(at(1.0, |_, _| Ok(f64::NAN)).unwrap_err().to_string().contains("quantity"));
    assert!(at(f64::NAN, |_, _| Ok(1.0)).is_err() && at(0.0, |_, _| Ok(1.0)).is_err());
    // Refused a little off: closer by it works.
    let near =
        at(
            1.0,
            |one, _| {
                if (one.x - 1.0).abs() < 1e-3 { Ok(one.x.exp()) } else { Ok(f64::INFINITY) }
            },
        );
    let got = near.unwrap().per.x;
    assert!((got.value - 1f64.exp()).abs() <= got.error && got.error < 1e-9);
    // Nowhere but there.
    let alone = at(1.0, |one, _| if one.x == 1.0 { Ok(1.0) } else { Ok(f64::INFINITY) });
    assert!(alone.is_err());
}
