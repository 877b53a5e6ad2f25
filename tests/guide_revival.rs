//! Revival at the cut-off of a lower mode, and the scaling laws, against the differential equation.

#[path = "support/tapered.rs"]
#[allow(dead_code)] // shared by several tests
mod tapered;

use merging_saddles::Complex64 as C;
use merging_saddles::guide::{SlopingGuide, revival};
use std::f64::consts::PI;
use tapered::{Snapshot, Taper};

/// Largest modulus inside.
fn inside(s: &Snapshot) -> f64 {
    s.psi[..=s.inside].iter().map(|u| u.norm()).fold(0.0, f64::max)
}

/// Slope of `ln y` over `ln x` by least squares.
fn exponent(points: &[(f64, f64)]) -> f64 {
    let n = points.len() as f64;
    let [mx, my] = [0, 1].map(|i| {
        points.iter().map(|&(x, y)| if i == 0 { x.ln() } else { y.ln() }).sum::<f64>() / n
    });
    let [top, low] = points.iter().fold([0.0, 0.0], |[top, low], &(x, y)| {
        [top + (x.ln() - mx) * (y.ln() - my), low + (x.ln() - mx).powi(2)]
    });
    top / low
}

/// One `eps` of the scan: the amplitude inside at the cut-off of mode 2, half way to that of mode 1, there, and one
/// layer's time later; and the two revivals by the formula.
fn released(eps: f64) -> ([f64; 4], [f64; 2]) {
    let scale = eps.cbrt();
    // Nothing that the absorbing layer throws back arrives in time.
    let reach = (1.2 * PI / scale + 15.0) / scale;
    let ranges = [0.0, 0.5 * PI, PI, PI + scale];
    let shots = Taper::near(2, 1.0, eps, 2.5, 8.0).run(&ranges, reach, 1.0);
    let seen = [0, 1, 2, 3].map(|i| inside(&shots[i]));
    let guide = SlopingGuide::new(2, 1.0, eps).unwrap();
    (seen, [0.0, 1.0].map(|t| guide.revival(1, 0.5 * PI - t * scale).unwrap()))
}

/// Amplitude inside at cut-off by the solution, from two starts, and by the uniform field.
fn at_cut_off(mode: u32, m: f64, eps: f64) -> [f64; 3] {
    let solution = |knee: f64, length: f64| {
        let taper = Taper::near(mode, m, eps, knee, length);
        inside(&taper.run(&[0.0], 12.0 * (m / eps).cbrt(), 1.0)[0])
    };
    let guide = SlopingGuide::new(mode, m, eps).unwrap();
    let field = guide.outside(guide.cutoff_width(), 0.0).unwrap().quadrature(1e-9).unwrap();
    [solution(2.5, 8.0), solution(4.0, 9.0), field.value.norm()]
}

#[test]
fn revival_and_scaling_laws() {
    // Mode 2 released, then the cut-off of mode 1 at r = pi.
    let scan = [0.02, 0.006, 0.002].map(|eps: f64| {
        let (seen, formula) = released(eps);
        println!("eps {eps}: {seen:.5?} revival {formula:.5?}");
        for (f, s) in formula.iter().zip(&seen[2..]) {
            assert!((f / s - 1.0).abs() < 0.2 * eps.powf(2.0 / 3.0), "{formula:?} {seen:?}");
        }
        (eps, seen)
    });
    for (which, expected) in [(1, 1.0), (2, 2.0 / 3.0), (3, 2.0 / 3.0)] {
        let found = exponent(&scan.map(|(eps, seen)| (eps, seen[which])));
        println!("exponent {found:.3}, expected {expected:.3}");
        assert!((found - expected).abs() < 0.02, "{found} {expected}");
    }
}

#[test]
fn amplitude_at_cut_off() {
    // eps^(1/6), reached the sooner the lower the mode.
    for (mode, within) in [(1, 0.005), (2, 0.03)] {
        let scan = [1e-2, 1e-3, 1e-4].map(|eps| {
            let [near, far, field] = at_cut_off(mode, 1.0, eps);
            println!("mode {mode} eps {eps}: {near:.5} {far:.5} uniform field {field:.5}");
            assert!((near / far - 1.0).abs() < 2e-5, "the start matters: {near} {far}");
            assert!((field / near - 1.0).abs() < 0.15 * eps, "{field} {near}");
            (eps, near)
        });
        let found = exponent(&scan);
        println!("exponent {found:.4}, last {:.4}", exponent(&scan[1..]));
        assert!((found - 1.0 / 6.0).abs() < within, "{found}");
        assert!((exponent(&scan[1..]) - 1.0 / 6.0).abs() < 0.3 * within);
    }
}

#[test]
#[ignore = "some minutes; its tables are in the notes of the module `guide`"]
fn scaling_laws_far_down() {
    let step = |last: (f64, f64), now: (f64, f64)| (now.1 / last.1).ln() / (now.0 / last.0).ln();
    for (mode, m) in [(1, 1.0), (2, 1.0), (3, 1.0), (1, 0.55), (1, 1.5)] {
        println!("mode {mode} m {m}: eps, solution, its exponent, field, its exponent");
        let mut last = [(1.0, 1.0); 2];
        for eps in [1e-2, 1e-3, 3e-4, 1e-4, 3e-5, 1e-5] {
            let [near, far, field] = at_cut_off(mode, m, eps);
            let now = [(eps, near), (eps, field)];
            let [e, f] = [step(last[0], now[0]), step(last[1], now[1])];
            println!("| {eps:.0e} | {near:.6} ({far:.6}) | {e:.4} | {field:.6} | {f:.4} |");
            last = now;
        }
    }
    let mut last = [(1.0, 1.0); 4];
    for eps in [3e-2, 1e-2, 3e-3, 1e-3, 3e-4, 1e-4] {
        let (seen, formula) = released(eps);
        let now = seen.map(|s| (eps, s));
        let e = [0, 1, 2, 3].map(|i| step(last[i], now[i]));
        let [seen, formula] =
            [&seen[..], &formula].map(|v| v.iter().map(|v| format!("{v:.3e}")).collect::<Vec<_>>());
        println!("| {eps:.0e} | {} | {e:.3?} | {} |", seen.join(" "), formula.join(" "));
        last = now;
    }
}

#[test]
#[ignore = "some minutes; its figures are in the notes of the module `guide`"]
fn revivals_of_other_guides() {
    // Density ratio, parity, profile and losses, one after the other, at the lower cut-off and one layer's time later.
    let cases = [
        ("m = 0.55", 2, false, 0.55, 0.0, 0.0),
        ("even", 3, true, 1.0, 0.0, 0.0),
        ("bent", 2, false, 1.0, 0.0, 0.04),
        ("losses", 2, false, 1.0, 0.004, 0.0),
    ];
    for (name, mode, even, m, loss, c) in cases {
        let eps = 0.01f64;
        let complex = C::new(eps, eps * loss);
        let mut taper = Taper::slow(mode, even, m, eps, 3.0);
        let cut = (f64::from(mode) - if even { 1.0 } else { 0.5 }) * PI;
        let start = taper.profile.clone();
        // The slow start up to r = 0, then the bend.
        taper.profile = std::rc::Rc::new(move |r| {
            if r <= 0.0 { start(r) } else { (cut - r + c * r * r, 2.0 * c * r - 1.0) }
        });
        taper.eps = complex;
        let there = if c > 0.0 { (1.0 - (1.0 - 4.0 * c * PI).sqrt()) / (2.0 * c) } else { PI };
        let slope = 1.0 - 2.0 * c * there;
        let length = (m / (eps * slope)).cbrt();
        let times = [0.0, there, there + eps * length * length];
        let shots = taper.run(&times, (1.2 * there / eps.cbrt() + 15.0) / eps.cbrt(), 1.0);
        let guide = SlopingGuide::new(mode, m, complex).unwrap();
        let guide = if even { guide.even().unwrap() } else { guide };
        let guide = if c > 0.0 { guide.curved(&[c]).unwrap() } else { guide };
        // With losses the mode is known at its own cut-off.
        let at_cut_off = guide.outside(cut, 0.0).unwrap().quadrature(1e-8).unwrap().value.norm();
        let incoming = shots[0].psi[shots[0].inside].norm() / at_cut_off;
        for shot in &shots[1..] {
            let (seen, formula) =
                (inside(shot) / incoming, guide.revival(mode - 1, shot.h).unwrap());
            println!(
                "{name} incoming {incoming:.4} r {:.3}: {seen:.5} formula {formula:.5}",
                shot.r
            );
            assert!((formula / seen - 1.0).abs() < 0.15, "{name}: {formula} {seen}");
        }
    }
}

#[test]
fn revival_far_before_is_static() {
    // R(t, 0) -> (1/t) (1 + (pi^(1/2)/2) |t|^(-3/2) e^(..)) for t -> -infinity (derived relation).
    for t in [-10.0, -30.0] {
        let r = revival(t, 0.0).unwrap().value;
        let rest = (r * t - 1.0).norm() * f64::abs(t).powf(1.5);
        assert!((rest / (0.5 * PI.sqrt()) - 1.0).abs() < 0.1, "{t}: {rest}");
    }
    // i R_t + R_yy = 0 and R_y = t R at y = 0, by differences.
    let (t, y, s) = (0.7, 0.4, 1e-3);
    let at = |t: f64, y: f64| revival(t, y).unwrap().value;
    let r_t = (at(t + s, y) - at(t - s, y)) / (2.0 * s);
    let r_yy = (at(t, y + s) - at(t, y) * 2.0 + at(t, y - s)) / (s * s);
    let i = C::new(0.0, 1.0);
    assert!((i * r_t + r_yy).norm() < 1e-3, "{r_t} {r_yy}");
    let r_y = (at(t, s) * 4.0 - at(t, 2.0 * s) - at(t, 0.0) * 3.0) / (2.0 * s);
    assert!((r_y - at(t, 0.0) * t).norm() < 1e-4, "{r_y}");
    assert!(revival(f64::NAN, 0.0).is_err() && revival(0.0, -1.0).is_err());
    let even = SlopingGuide::new(3, 1.0, 0.01).unwrap().even().unwrap();
    assert!(even.revival(1, 1.5).is_err() && even.revival(2, 3.0).is_ok());
    assert!(SlopingGuide::new(2, 1.0, 0.01).unwrap().revival(2, 1.5).is_err());
}
