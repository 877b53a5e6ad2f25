//! Signed crossings of two polylines by the signs of orientations, without a division.

use num_complex::Complex64;

fn cross(a: Complex64, b: Complex64) -> f64 {
    a.re * b.im - a.im * b.re
}

/// How often `path` crosses `ridge` from its right to its left (seen along the ridge), less the
/// crossings from left to right.
pub(crate) fn crossings(ridge: &[Complex64], path: &[Complex64]) -> i32 {
    let mut count = 0;
    each_crossing(ridge, path, |sign, _, _| count += sign);
    count
}

/// Calls `take` with the sign of each crossing and the pieces of the ridge and of the path on which it
/// lies.
pub(crate) fn each_crossing(
    ridge: &[Complex64],
    path: &[Complex64],
    mut take: impl FnMut(i32, usize, usize),
) {
    for (i, r) in ridge.windows(2).enumerate() {
        let (low_re, high_re) = (r[0].re.min(r[1].re), r[0].re.max(r[1].re));
        let (low_im, high_im) = (r[0].im.min(r[1].im), r[0].im.max(r[1].im));
        for (j, p) in path.windows(2).enumerate() {
            if p[0].re.max(p[1].re) < low_re
                || p[0].re.min(p[1].re) > high_re
                || p[0].im.max(p[1].im) < low_im
                || p[0].im.min(p[1].im) > high_im
            {
                continue;
            }
            // Half-open: a point exactly on the other line counts as left of it.
            let along = r[1] - r[0];
            let from_left = cross(along, p[0] - r[0]) >= 0.0;
            let to_left = cross(along, p[1] - r[0]) >= 0.0;
            if from_left == to_left {
                continue;
            }
            let step = p[1] - p[0];
            let start_left = cross(step, r[0] - p[0]) >= 0.0;
            let end_left = cross(step, r[1] - p[0]) >= 0.0;
            if start_left != end_left {
                take(if to_left { 1 } else { -1 }, i, j);
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn points(list: &[(f64, f64)]) -> Vec<Complex64> {
        list.iter().map(|&(re, im)| Complex64::new(re, im)).collect()
    }

    #[test]
    fn right_to_left_counts_plus_one() {
        let ridge = points(&[(0.0, 0.0), (1.0, 0.0), (2.0, 0.0)]);
        assert_eq!(crossings(&ridge, &points(&[(0.5, -1.0), (0.5, 1.0)])), 1);
        assert_eq!(crossings(&ridge, &points(&[(0.5, 1.0), (0.5, -1.0)])), -1);
        assert_eq!(crossings(&ridge, &points(&[(3.0, -1.0), (3.0, 1.0)])), 0);
        // Through a vertex of either line: once, not twice and not never.
        assert_eq!(crossings(&ridge, &points(&[(1.0, -1.0), (1.0, 1.0)])), 1);
        assert_eq!(crossings(&ridge, &points(&[(0.5, -1.0), (0.5, 0.0), (0.5, 1.0)])), 1);
        assert_eq!(crossings(&ridge, &points(&[(0.5, -1.0), (0.5, 0.0), (0.7, -1.0)])), 0);
    }
}
