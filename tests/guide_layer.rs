//! The transition functions against two tables, their equation and their limits.

use merging_saddles::guide::layer::{Transition, bound, bound_extended, free, free_extended};
use merging_saddles::{Complex64 as C, Error, Scaled};
use proptest::prelude::*;

const I: C = C::new(0.0, 1.0);

/// U against max(|U|, |U_y|/(1+|t|)), U_y against that times (1+|t|); the larger of the two.
fn error(t: C, got: [C; 2], exact: [C; 2]) -> f64 {
    let size = 1.0 + t.norm();
    let scale = exact[0].norm().max(exact[1].norm() / size);
    ((got[0] - exact[0]).norm() / scale).max((got[1] - exact[1]).norm() / (scale * size))
}

fn pair(x: Transition<C>) -> [C; 2] {
    [x.u, x.u_y]
}

fn rows(text: &str) -> impl Iterator<Item = Vec<f64>> {
    text.lines()
        .filter(|l| !l.starts_with('#'))
        .skip(1)
        .map(|l| l.split(',').map(|x| x.parse().unwrap()).collect())
}

/// Prints the distribution and holds its largest to a bar.
fn hold(what: &str, mut seen: Vec<f64>, bar: f64) {
    seen.sort_by(f64::total_cmp);
    let n = seen.len();
    println!(
        "{what}: max {:.1e}, p99 {:.1e}, median {:.1e}",
        seen[n - 1],
        seen[n * 99 / 100],
        seen[n / 2]
    );
    assert!(seen[n - 1] < bar, "{what}: {:?}", &seen[n - 5..]);
}

#[test]
fn table_of_values() {
    // tests/data/cutoff_layer.csv, computed with mpmath at 60 digits (its header says how).
    let mut seen = Vec::new();
    for v in rows(include_str!("data/cutoff_layer.csv")) {
        let (t, y) = (C::new(v[0], v[1]), v[2]);
        for (got, at) in [(bound(t, y).unwrap(), 3), (free(t, y).unwrap(), 7)] {
            let exact = [C::new(v[at], v[at + 1]), C::new(v[at + 2], v[at + 3])];
            seen.push(error(t, pair(got), exact));
        }
    }
    assert_eq!(seen.len(), 400);
    hold("table", seen, 5e-14);
}

#[test]
fn far_out_and_round_the_seam_of_the_regions() {
    // tests/data/cutoff_layer_far.csv, made by the script beside it (mpmath).
    let (mut seam, mut outer) = (Vec::new(), Vec::new());
    for (i, v) in rows(include_str!("data/cutoff_layer_far.csv")).enumerate() {
        let (t, y) = (C::new(v[0], v[1]), C::new(v[2], v[3]));
        let both = [(bound_extended(t, y), 4), (free_extended(t, y), 9)];
        for (got, at) in both {
            let (got, n) = (got.unwrap(), v[at] as i64);
            let exact = [C::new(v[at + 1], v[at + 2]), C::new(v[at + 3], v[at + 4])];
            let e = error(t, [got.u.mantissa_at(n), got.u_y.mantissa_at(n)], exact);
            if e > 1e-13 {
                println!("{t} {y} {e:e}");
            }
            if i < 80 { seam.push(e) } else { outer.push(e) }
        }
    }
    assert_eq!((seam.len(), outer.len()), (160, 320));
    hold("seam", seam, 1e-13);
    hold("far", outer, 1e-13);
}
