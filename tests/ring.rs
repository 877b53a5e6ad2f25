//! The core: division and normal form for clusters of one to four saddles.

use merging_saddles::integral::{Amplitude, Unit};
use merging_saddles::ring::{NormalForm, Orders, Start, divide};
use merging_saddles::{Complex64, Phase};
use proptest::prelude::*;

fn c(re: f64, im: f64) -> Complex64 {
    Complex64::new(re, im)
}

/// f = -i (sinh z - (1 + a) z): two saddles that merge at a = 0.
fn fold(a: f64) -> impl Fn(Complex64) -> (Complex64, Complex64) {
    move |z: Complex64| {
        let f = (z.sinh() - z) - z * a;
        (f * c(0.0, -1.0), (z.cosh() - (1.0 + a)) * c(0.0, -1.0))
    }
}

#[test]
fn fold_at_coalescence_has_the_published_coefficients() {
    // DLMF 10.20: J_nu(nu z) at z = 1 (zeta = 0) has A_1 = -1/225, A_2 = 151439/218295000,
    // B_0 = 2^(1/3)/70, B_1 = -1213 2^(1/3)/1023750. With nu = k, J_k(k) is the integral of
    // exp(k (sinh z - z)) over 2 pi i, DLMF 10.9.17, so p_0^(2n) ~ A_n and p_1^(2n+1) ~ B_n up to
    // the factors that Ai = I_0/(..) and Ai' carry; ratios to the leading order remove them.
    let form = NormalForm::find(&fold(0.0), 2, c(0.0, 0.0), 2.0).expect("a form");
    let orders = Orders::new(&form, &Start::new(&form, &Unit).expect("finite"));
    let p = |n: usize, j: usize| orders.coefficients(n)[j];
    assert!(form.x(1).norm() < 1e-14 && form.level().norm() < 1e-14);
    // C_0 = -2 pi (3k)^(-1/3) Ai, C_1 = 2 pi i (3k)^(-2/3) Ai' (from DLMF 9.5.4), so with
    // J ~ (4 zeta/(1 - z^2))^(1/4) [Ai k^(-1/3) sum A_n k^(-2n) + Ai' k^(-5/3) sum B_n k^(-2n)]
    // (DLMF 10.20.4): p_0^(2n)/p_0^(0) = A_n and p_1^(2n+1)/p_0^(0) = B_n 3^(1/3)/(-i).
    let lead = p(0, 0);
    let third = 3f64.powf(1.0 / 3.0);
    let b = |n: usize| p(2 * n + 1, 1) / lead * c(0.0, -1.0) / third;
    let a = |n: usize| p(2 * n, 0) / lead;
    let cube = 2f64.powf(1.0 / 3.0);
    println!("{:?} {:?} {:?} {:?}", a(1), a(2), b(0), b(1));
    // The choice of the cube root turns u by a third; B_n turns with it, A_n does not.
    assert!((a(1) - c(-1.0 / 225.0, 0.0)).norm() < 1e-15);
    assert!((a(2) - c(151439.0 / 218295000.0, 0.0)).norm() < 1e-15);
    assert!((b(0).norm() - cube / 70.0).abs() < 1e-15);
    assert!((b(1).norm() - 1213.0 * cube / 1023750.0).abs() < 1e-15);
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(64))]
    #[test]
    fn division_is_exact(seed in prop::collection::vec((-1.0f64..1.0, -1.0f64..1.0), 40), degree in 1usize..5) {
        // A divisor with all zeros inside |v| < 0.9, as the ring demands.
        let mut d = vec![c(1.0, 0.0)];
        for &(re, im) in &seed[..degree] {
            let root = c(re, im) * 0.6;
            let mut next = vec![c(0.0, 0.0); d.len() + 1];
            for (l, &x) in d.iter().enumerate() {
                next[l + 1] += x;
                next[l] -= x * root;
            }
            d = next;
        }
        let g: Vec<Complex64> = seed.iter().map(|&(re, im)| c(re, im)).collect();
        let mut q = g.clone();
        divide(&mut q, &d);
        let mut back = vec![c(0.0, 0.0); g.len()];
        back[..degree].copy_from_slice(&q[..degree]);
        for (n, &h) in q[degree..].iter().enumerate() {
            for (l, &x) in d.iter().enumerate() {
                back[n + l] += h * x;
            }
        }
        for (x, y) in back.iter().zip(&g) {
            prop_assert!((x - y).norm() < 1e-12);
        }
    }
}

#[test]
fn normal_forms_of_one_to_four_saddles_reproduce_the_phase() {
    // f = z^(K+2) exp(z/5)/.. with K+1 merged saddles at 0, unfolded by small lower terms.
    for saddles in 1..=4usize {
        for size in [0.0, 1e-12, 1e-6, 1e-3] {
            let f = move |z: Complex64| {
                let degree = saddles as i32 + 1;
                let bend = (z / 5.0).exp();
                let small = (c(0.3, 0.4) * z + z * z * 0.1) * size;
                let slope = (c(0.3, 0.4) + z * 0.2) * size;
                let f = z.powi(degree) * bend + small;
                (f, (z.powi(degree - 1) * degree as f64 + z.powi(degree) / 5.0) * bend + slope)
            };
            let form = NormalForm::find(&f, saddles, c(0.0, 0.0), 0.7)
                .unwrap_or_else(|| panic!("no form for {saddles} saddles, size {size}"));
            assert!(form.residual() < 4e-15, "{saddles} {size}: {}", form.residual());
            assert!(form.tail() < 1e-12);
            // Inside the ring too: f(z(u)) = A + Phi(u).
            for v in [c(0.3, -0.2), c(-0.5, 0.1), c(0.0, 0.6)] {
                let u = v * form.radius();
                let mut phi = u.powi(form.degree() as i32) + form.level();
                for j in 1..saddles {
                    phi += form.x(j) * u.powi(j as i32);
                }
                let difference = Phase::value(&f, form.point(v)) - phi;
                assert!(difference.norm() < 1e-15 * (10.0 + phi.norm()), "{difference}");
            }
        }
    }
}

#[test]
fn a_pole_of_the_amplitude_inside_the_ring_shows_in_the_tail() {
    let form = NormalForm::find(&fold(0.1), 2, c(0.0, 0.0), 1.5).expect("a form");
    let tail = |pole: Complex64| {
        Start::new(&form, &move |z: Complex64| (z - pole).inv()).expect("finite").tail()
    };
    assert!(tail(c(0.9, 0.2)) > 1e-2);
    assert!(tail(c(0.0, 4.0)) < 1e-6);
    assert!(Unit.value(c(1.0, 0.0)) == c(1.0, 0.0));
}
