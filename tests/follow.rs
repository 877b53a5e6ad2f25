//! Saddles keep their labels through a parameter.

use merging_saddles::saddles::{Region, follow, locate};
use merging_saddles::{Complex64, Error};

fn c(re: f64, im: f64) -> Complex64 {
    Complex64::new(re, im)
}

/// cosh z = 1 + a along a loop of complex a round 0: after one turn the two saddles have changed places,
/// after two each is back (z ~ +-sqrt(2 a), elementary).
#[test]
fn a_turn_round_the_coalescence_exchanges_two_saddles() {
    let family = |turn: f64| {
        let a = Complex64::from_polar(0.3, std::f64::consts::TAU * turn);
        move |z: Complex64| ((z.sinh() - z) - z * a, z.cosh() - 1.0 - a)
    };
    let region = Region { low: c(-2.0, -2.1), high: c(2.2, 2.0) };
    let start = locate(&family(0.0), region).expect("saddles");
    assert_eq!(start.len(), 2);
    let turns: Vec<f64> = (0..=40).map(|n| f64::from(n) / 20.0).collect();
    let paths = follow(family, &turns, &start).expect("followed");
    for (turn, list) in turns.iter().zip(&paths) {
        for saddle in list {
            let a = Complex64::from_polar(0.3, std::f64::consts::TAU * turn);
            assert!((saddle.z.cosh() - 1.0 - a).norm() < 1e-12);
        }
    }
    assert!((paths[20][0].z - start[1].z).norm() < 1e-11);
    assert!((paths[40][0].z - start[0].z).norm() < 1e-11);
}

/// Two real saddles that pass at a distance of 1e-3 keep to their own branch of
/// (z - x)(z + x) = -d^2, and large steps are halved until they do.
#[test]
fn a_close_encounter_does_not_swap_labels() {
    let d = 1e-3;
    let family = move |x: f64| {
        move |z: Complex64| (z * z * z / 3.0 - z * (x * x + d * d), z * z - (x * x + d * d))
    };
    let region = Region { low: c(-3.0, -1.0), high: c(3.1, 1.1) };
    let start = locate(&family(-2.0), region).expect("saddles");
    let paths = follow(family, &[-2.0, -0.5, 0.5, 2.0], &start).expect("followed");
    for (before, after) in start.iter().zip(&paths[3]) {
        // sqrt(x^2 + d^2) never vanishes: each returns to where it came from.
        assert!((before.z - after.z).norm() < 1e-12);
    }
    assert!(matches!(follow(family, &[-2.0, f64::NAN], &start), Err(Error::Domain { .. })));
}
