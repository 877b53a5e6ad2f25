//! The wide-angle form against finite elements for Helmholtz's equation over a sloping bed.
//!
//! Tables: `data/helmholtz_beds_*.csv`, made by `data/make_helmholtz_beds.py`, which says how, with figures of
//! convergence. One mode comes in over a flat bed and goes through its cut-off on a straight slope.

#[path = "support/compare.rs"]
#[allow(dead_code)] // shared by several tests
mod compare;
#[path = "support/tapered.rs"]
#[allow(dead_code)] // only for `compare`
mod tapered;

use compare::{error, incoming};
use merging_saddles::Complex64 as C;
use merging_saddles::guide::{AcousticGuide, Passage, SlopingGuide, TwoLayer};
use std::f64::consts::PI;

struct Case {
    mode: u32,
    m: f64,
    delta: f64,
    eps: f64,
    rows: Vec<[f64; 7]>,
}

/// Layer's times that are compared.
const TIMES: [f64; 5] = [-1.0, 0.0, 1.0, 2.0, 3.0];

fn text(file: &str) -> String {
    std::fs::read_to_string(format!("{}/tests/data/{file}", env!("CARGO_MANIFEST_DIR"))).unwrap()
}

fn rows<const N: usize>(file: &str) -> Vec<[f64; N]> {
    let numbers = |line: &str| {
        let mut fields = line.split(',').map(|f| f.parse().unwrap());
        std::array::from_fn(|_| fields.next().unwrap())
    };
    let text = text(file);
    let lines = text.lines().filter(|l| l.starts_with(|c: char| c == '-' || c.is_ascii_digit()));
    lines.map(numbers).collect()
}

fn case(name: &str) -> Case {
    let text = text(&format!("helmholtz_beds_{name}.csv"));
    let figure = |what: &str| -> f64 {
        let line = text.lines().next().unwrap();
        let rest = &line[line.find(what).unwrap() + what.len()..];
        rest.split([',', ' ']).find(|s| !s.is_empty()).unwrap().parse().unwrap()
    };
    let rows = rows(&format!("helmholtz_beds_{name}.csv"));
    Case {
        mode: figure("n =") as u32,
        m: figure("m ="),
        delta: figure("delta ="),
        eps: figure("eps ="),
        rows,
    }
}

/// Errors inside and outside at each layer's time, with one complex constant taken out at the first; and that.
fn errors(case: &Case, guide: &SlopingGuide) -> (Vec<[f64; 2]>, C) {
    let cut = (f64::from(case.mode) - 0.5) * PI;
    let mut constant = None;
    let rows = TIMES.map(|t| {
        let mut sides = [Vec::new(), Vec::new()];
        for &[_, r, _, x, within, re, im] in case.rows.iter().filter(|row| row[0] == t).step_by(3) {
            let h = cut - r;
            let field = if within == 1.0 {
                guide.inside(h, x.min(h))
            } else {
                guide.outside(h, (x - h).max(0.0))
            };
            let value = field.unwrap().quadrature(1e-8).unwrap().value;
            sides[usize::from(within != 1.0)].push((value, C::new(re, im)));
        }
        let constant = *constant.get_or_insert_with(|| incoming(&sides));
        sides.map(|side| error(&side, constant))
    });
    (rows.to_vec(), constant.unwrap())
}

#[test]
fn the_wide_angle_form_solves_helmholtz_s_equation() {
    // Largest errors inside and outside up to t = 2, and outside at t = 3.
    for (name, bars) in [
        ("A", [1e-2, 2.2e-3, 3.3e-3]),
        ("B", [2.6e-2, 3.4e-2, 1.8e-2]),
        ("C", [7.4e-3, 8.7e-3, 5.3e-3]),
        ("D", [1.3e-2, 2.3e-2, 1.5e-2]),
        ("E1", [1e-2, 2.2e-3, 3.3e-3]),
        ("E2", [2.4e-2, 1e-2, 9.2e-3]),
    ] {
        let case = case(name);
        let narrow = SlopingGuide::new(case.mode, case.m, case.eps).unwrap();
        let wide = narrow.clone().wide_angle(case.delta).unwrap();
        let (wide, constant) = errors(&case, &wide);
        let (narrow, _) = errors(&case, &narrow);
        println!("{name} wide {wide:.5?}, one-way {narrow:.5?}, constant {constant:.4}");
        let late = TIMES.len() - 1;
        let most = |rows: &[[f64; 2]], side: usize| {
            rows[..late].iter().map(|row| row[side]).fold(0.0, f64::max)
        };
        assert!(most(&wide, 0) < bars[0] && most(&wide, 1) < bars[1] && wide[late][1] < bars[2]);
        // The one-way equation loses the beam, the more the farther it goes.
        assert!(narrow[late][1] > 3.0 * wide[late][1]);
        // Flux in is flux in: the mode is the same but for what the start of the slope does to it.
        assert!((constant.norm() - 1.0).abs() < 0.011);
    }
}

#[test]
fn the_beam_points_where_the_energy_goes() {
    for name in ["A", "B", "C", "D", "E1", "E2"] {
        let Case { mode, m, delta, eps, .. } = case(name);
        let sea = TwoLayer {
            frequency_hz: 100.0,
            water_speed_m_per_s: 1500.0,
            bottom_speed_m_per_s: 1500.0 * (1.0 + delta).sqrt(),
            water_density_kg_per_m3: 1000.0,
            bottom_density_kg_per_m3: 1000.0 / m,
            water_attenuation_db_per_wavelength: 0.0,
            bottom_attenuation_db_per_wavelength: 0.0,
        };
        let run = AcousticGuide::new(sea).unwrap();
        let depth = run.cutoff_depth_m(mode).unwrap();
        let run = run.upslope(mode, (0.5 * eps * delta.sqrt()).atan(), 2.0 * depth).unwrap();
        assert!((run.eps() / eps - 1.0).abs() < 1e-9);
        // Energy per angle by finite elements, far out.
        let rows: Vec<[f64; 2]> = rows(&format!("helmholtz_beams_{name}.csv"));
        let top = rows.iter().max_by(|a, b| a[1].total_cmp(&b[1])).unwrap();
        let worst = |passage: &Passage| {
            let at = |row: &[f64; 2]| passage.radiation_per_rad(row[0].to_radians()).unwrap();
            rows.iter().map(|row| (at(row) - row[1]).abs() / top[1]).fold(0.0, f64::max)
        };
        let (wide, narrow) = (run.passage(), run.passage().clone().paraxial().unwrap());
        let axis = wide.beam().unwrap().axis_rad.to_degrees();
        let (seen, before) = (worst(wide), worst(&narrow));
        println!(
            "{name}: axis {axis:.2}, seen {:.2} degrees, energy per angle off by {seen:.1e} (one-way {before:.1e})",
            top[0]
        );
        // Of order eps near the axis, the square of eps over p below it.
        assert!((axis - top[0]).abs() < 0.5 && seen < 0.5 * eps);
    }
}
