//! Curved profiles, even modes and losses against a solution of the guide's equation; energy.

#[path = "support/compare.rs"]
mod compare;
#[path = "support/tapered.rs"]
#[allow(dead_code)] // shared by several tests
mod tapered;

use compare::{error, incoming, pairs, turn};
use merging_saddles::Complex64 as C;
use merging_saddles::guide::{Order, Passage, Profile, QuantumWell, SlopingGuide};
use std::f64::consts::PI;
use std::rc::Rc;
use tapered::{Snapshot, Taper, flat_before};

/// Times of the layer at which the fields are compared; the phase is taken at the first.
const TIMES: [f64; 2] = [0.0, 2.0];

/// The solution at these times.
fn solution(t: &Taper) -> Vec<Snapshot> {
    let (eps, m) = (t.eps.norm(), t.m);
    t.run(&TIMES.map(|time| time * (m * m * eps).cbrt()), 20.0 * (m / eps).cbrt(), 1.0)
}

/// Relative L2 errors `[inside, outside]` at each time, with one complex constant taken out (the start of the
/// solution leaves some of the mode behind). `field` takes range, width, position and whether that lies inside.
fn errors(
    t: &Taper,
    shots: &[Snapshot],
    field: impl Fn(f64, f64, f64, bool) -> C,
) -> Vec<[f64; 2]> {
    let length = (t.m / t.eps.norm()).cbrt();
    let sides: Vec<_> = shots
        .iter()
        .map(|s| pairs(s, 10.0 * length, |h, x, within| field(s.r, h, x, within)))
        .collect();
    let phase = incoming(&sides[0]);
    println!("incoming {:.5}, {:.5} rad", phase.norm(), phase.arg());
    sides.iter().map(|side| [error(&side[0], phase), error(&side[1], phase)]).collect()
}

#[test]
fn curved_profiles() {
    let eps = 0.01;
    for (c, from) in [(0.25, -1.4), (-0.2, -1.6)] {
        let (t, passage) = bent_well(eps, c, from);
        let (antinode, shots) = (t.antinode(), solution(&t));
        println!(
            "fit departs {:.1e} from {}",
            passage.fit_departure(),
            passage.fitted_from() * eps
        );
        let [leading, local, next] =
            [Order::Leading, Order::LocalSlope, Order::Next].map(|order| {
                let passage = passage.clone().order(order);
                errors(&t, &shots, |r, h, x, within| {
                    // A hair to the right side of the wall.
                    let x =
                        if within { x.min(h * (1.0 - 1e-12)) } else { x.max(h * (1.0 + 1e-12)) };
                    passage.field(r / eps, x).unwrap().value * antinode
                })
            });
        println!("c {c} leading {leading:.5?}\n local {local:.5?}\n next {next:.5?}");
        // With the local slope most of the next order is there outside; inside it takes the whole of it.
        for (i, ([before, without], [inside, outside])) in leading.iter().zip(&next).enumerate() {
            assert!(*outside < [8e-4, 1.8e-3][i] && *inside < [6e-4, 4e-3][i]);
            assert!(outside < &(without / 11.0) && inside < &(before / 10.0));
            assert!(inside < &(local[i][0] / 1.6));
        }
    }
}

#[test]
fn curved_with_contrast_and_losses() {
    // Mode 2, m = 0.55, the profile h_c - r + c r^2; losses outside turn eps, those inside turn the well.
    // Slope -1.5 at r = -1 and flat before r = -4: an abrupt start leaves 2 % of mode 1.
    let (eps, m, c, from) = (0.02, 0.55, 0.25, -4.0);
    for (mode, turned, well) in [
        (2, C::from(1.0), C::from(1.0)),
        (1, C::new(1.0, 0.004), C::new(1.0, 0.01)),
        (2, C::new(1.0, 0.004), C::new(1.0, 0.01)),
    ] {
        let cut = (f64::from(mode) - 0.5) * PI;
        let t = Taper {
            mode,
            even: false,
            m,
            eps: turned * eps,
            well,
            from,
            profile: flat_before(move |r| (cut - r + c * r * r, 2.0 * c * r - 1.0), 1.0, 3.0),
        };
        // Lengths in 1/q; cut off at the complex range r_0, where the slope is s.
        let q = well.sqrt();
        let (b_0, lost) = (C::from(c), cut - q.inv() * cut);
        let r_0 = (1.0 - (1.0 - b_0 * lost * 4.0).sqrt()) / (2.0 * c);
        let s = 1.0 - b_0 * r_0 * 2.0;
        let b = b_0 / (q * s * s);
        let guide = SlopingGuide::new(mode, m, turned * eps * s / q).unwrap();
        let guide = guide.curved(&[b]).unwrap();
        let shots = solution(&t);
        let [leading, next] = [Order::Leading, Order::Next].map(|order| {
            let guide = guide.clone().order(order);
            errors(&t, &shots, |_, h, x, within| {
                let (h, x) = (q * h, q * x);
                let field = if within {
                    guide.inside(h, x)
                } else {
                    guide.outside(h, if x.re < h.re { C::from(0.0) } else { x - h })
                };
                field.unwrap().quadrature(1e-8).unwrap().value
            })
        });
        println!("mode {mode} well {well} leading {leading:.5?}\n next {next:.5?}");
        for ([inside, outside], [before, without]) in next.iter().zip(&leading) {
            assert!(*outside < 4e-3 && *inside < 1.8e-3);
            assert!(outside < &(without / 9.0) && inside < &(before / 9.0));
        }
    }
}

#[test]
fn even_and_higher_modes() {
    for (mode, even, m) in [(2, true, 1.0), (2, true, 0.55), (3, false, 1.5)] {
        let eps = 0.02;
        let t = Taper::slow(mode, even, m, eps, 3.0);
        let guide = SlopingGuide::new(mode, m, eps).unwrap();
        let guide = if even { guide.even().unwrap() } else { guide };
        let shots = solution(&t);
        let [leading, next] = [Order::Leading, Order::Next].map(|order| {
            let guide = guide.clone().order(order);
            errors(&t, &shots, |_, h, x, within| scaled(&guide, h, x, within))
        });
        println!("mode {mode} even {even} m {m} leading {leading:.5?}\n next {next:.5?}");
        for ([inside, outside], [before, without]) in next.iter().zip(&leading) {
            assert!(*outside < 2e-3 && *inside < 6e-3);
            assert!(outside < &(without / 15.0) && inside < &(before / 6.0));
        }
    }
}

fn scaled(guide: &SlopingGuide, h: f64, x: f64, within: bool) -> C {
    let field = if within { guide.inside(h, x) } else { guide.outside(h, (x - h).max(0.0)) };
    field.unwrap().quadrature(1e-8).unwrap().value
}

#[test]
fn energy_is_kept_and_leaves_the_guide() {
    // The formula's energy inside and outside is that of the incoming mode, at any range.
    let well = QuantumWell.along(1, Profile::plane(4.0, 0.01).unwrap(), 0.0).unwrap();
    let unit = 1.0 / SlopingGuide::new(1, 1.0, 0.01).unwrap().adiabatic(4.0).unwrap().antinode.re;
    for t in [-2.0, -1.0, 0.0, 1.0] {
        let time = well.cutoff_range() + t * well.layer_range();
        let (wall, length) = (well.profile().width(time), well.layer_height());
        let inside = well.energy_inside(time).unwrap();
        // Simpson's rule over 24 layer lengths; the beam lies within 12.
        let steps = 240;
        let step = 24.0 * length / f64::from(steps);
        let outside: f64 = (0..=steps)
            .map(|j| {
                let weight = if j == 0 || j == steps { 1.0 } else { f64::from(2 + 2 * (j % 2)) };
                weight * well.field(time, wall + step * f64::from(j)).unwrap().value.norm_sqr()
            })
            .sum();
        let total = inside + outside * step / 3.0 / unit.powi(2);
        println!("t {t}: inside {inside:.5}, total {total:.6}");
        assert!((total - 1.0).abs() < 1e-3, "t {t}: {total}");
    }
    // All of it is in the spectrum of the beam.
    let step = 0.01 / well.layer_height();
    let radiated: f64 =
        (0..500).map(|j| well.radiation_per_wavenumber(step * f64::from(j)).unwrap() * step).sum();
    assert!((radiated - 1.0).abs() < 2e-3, "{radiated}");
}

/// A mode-1 well of half width `h_c - r + c r^2` at the time `r/eps`, from the range `from`: the reference
/// and the formula.
fn bent_well(eps: f64, c: f64, from: f64) -> (Taper, Passage) {
    let cut = 0.5 * PI;
    let profile = move |r: f64| (cut - r + c * r * r, 2.0 * c * r - 1.0);
    let t = Taper {
        mode: 1,
        even: false,
        m: 1.0,
        eps: C::from(eps),
        well: C::from(1.0),
        from,
        profile: Rc::new(profile),
    };
    let width = Profile::from_fn(from / eps, 1.4 / eps, move |time| {
        let (h, slope) = profile(eps * time);
        (h, slope * eps)
    });
    (t, QuantumWell.along(1, width.unwrap(), from / eps).unwrap())
}

#[test]
fn the_figure_covers_the_formula() {
    // Pointwise, with one constant phase taken out.
    for (eps, c, from) in
        [(0.1, 0.0, -2.0), (0.02, 0.0, -2.0), (0.02, 0.25, -1.4), (0.02, -0.2, -1.6)]
    {
        let (t, well) = bent_well(eps, c, from);
        let scale = eps.cbrt();
        let shots = t.run(&TIMES.map(|t| t * scale), 20.0 / scale, 0.8);
        let antinode = t.antinode();
        let (mut covered, mut ratios, mut phase) = (0, Vec::new(), None);
        for s in &shots {
            let station = well.station(s.r / eps).unwrap();
            let mut figures = Vec::new();
            let sides = pairs(s, 8.0 / scale, |h, x, within| {
                let x = if within { x.min(h * (1.0 - 1e-12)) } else { x.max(h * (1.0 + 1e-12)) };
                let u = station.field(x).unwrap();
                figures.push(u.error * antinode);
                u.value * antinode
            });
            let phase = *phase.get_or_insert_with(|| turn(&sides));
            for ((a, b), figure) in sides.iter().flatten().zip(figures) {
                let error = (a * phase - b).norm();
                covered += i32::from(error <= figure);
                ratios.push(figure / error.max(1e-300));
            }
        }
        ratios.sort_by(f64::total_cmp);
        let (total, median) = (ratios.len(), ratios[ratios.len() / 2]);
        println!(
            "eps {eps} c {c}: {covered} of {total} covered, least {:.2}, median {median:.1}",
            ratios[0]
        );
        assert_eq!(covered as usize, total);
        assert!(median < 20.0, "a figure that is always large is worth nothing: {median}");
    }
}
