//! look
#[path = "support/tapered.rs"]
mod tapered;
use merging_saddles::Complex64 as C;
use merging_saddles::guide::{Order, SlopingGuide};
use std::f64::consts::PI;
use tapered::{Snapshot, Taper};

fn compare(s: &Snapshot, guide: &SlopingGuide, turn: C, reach: f64) -> (f64, f64, C) {
    let mut sums = [[0.0; 2]; 2];
    let mut overlap = C::from(0.0);
    for (i, (&x, &psi)) in s.x.iter().zip(&s.psi).enumerate().take(s.end) {
        let side = usize::from(i < s.inside);
        if x - s.h > reach {
            break;
        }
        let every = if side == 1 {
            s.inside / 30
        } else {
            1 + (reach / 60.0 / (s.x[s.inside + 1] - s.x[s.inside])) as usize
        };
        if side == 1 && i % every != 0 || side == 0 && (i - s.inside) % every != 0 {
            continue;
        }
        let f =
            if side == 1 { guide.inside(s.h, x) } else { guide.outside(s.h, (x - s.h).max(0.0)) };
        let v = f.unwrap().quadrature(1e-8).unwrap().value * turn;
        sums[side][0] += (v - psi).norm_sqr();
        sums[side][1] += psi.norm_sqr();
        overlap += v.conj() * psi;
    }
    ((sums[0][0] / sums[0][1]).sqrt(), (sums[1][0] / sums[1][1]).sqrt(), overlap)
}

#[test]
fn table() {
    for m in [1.0f64, 0.55, 1.5] {
        for n in [1, 2] {
            for eps in [0.1, 0.04f64, 0.02, 0.01] {
                if n == 2 && eps != 0.01 {
                    continue;
                }
                let ts = [-2.0, -1.0, 0.0, 1.0, 2.0];
                let cut = (f64::from(n) - 0.5) * PI;
                let s = (m * m * eps).cbrt();
                let widths: Vec<f64> = ts.iter().map(|t| cut - t * s).collect();
                let taper = Taper { mode: n, m, eps, start: cut + 2.0 };
                let length = (m / eps).cbrt();
                let shots = taper.run(&widths, 25.0 * length, 1.0);
                for order in [Order::Leading, Order::Next] {
                    let guide = SlopingGuide::new(n, m, eps).unwrap().order(order).tolerance(1.0);
                    let (_, _, overlap) = compare(&shots[2], &guide, C::from(1.0), 10.0 * length);
                    let turn = overlap / overlap.norm();
                    let known = guide.adiabatic(taper.start).unwrap().exponent;
                    print!(
                        "m {m} n {n} eps {eps} {order:?} phase/eps {:.4}",
                        (turn * known.exp()).arg() / eps
                    );
                    for (shot, t) in shots.iter().zip(ts) {
                        let (out, inn, _) = compare(shot, &guide, turn, 10.0 * length);
                        print!(" | {t}: {out:.1e} {inn:.1e}");
                    }
                    println!();
                }
            }
        }
    }
}
