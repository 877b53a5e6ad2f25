//! Tables of tests/data, and the errors against them.

/// The rows of a table; fields that are no numbers are left out.
pub fn table(name: &str) -> Vec<Vec<f64>> {
    let path = format!("{}/tests/data/{name}.csv", env!("CARGO_MANIFEST_DIR"));
    let mut reader =
        csv::ReaderBuilder::new().comment(Some(b'#')).from_path(path).expect("the table is there");
    reader
        .records()
        .map(|row| row.unwrap().iter().filter_map(|x| x.parse().ok()).collect())
        .collect()
}

/// Prints maximum, 99th percentile and median, and checks the first two.
pub fn judge(what: &str, mut errors: Vec<f64>, max: f64, p99: f64) {
    assert!(errors.len() >= 40 && errors.iter().all(|e| !e.is_nan()), "{what}: NaN or too few");
    errors.sort_by(f64::total_cmp);
    let at = |q: f64| errors[((errors.len() - 1) as f64 * q).round() as usize];
    let line = format!("{what}: max {:.2e}, p99 {:.2e}, median {:.2e}", at(1.0), at(0.99), at(0.5));
    println!("{line}");
    assert!(at(1.0) <= max && at(0.99) <= p99, "{line}");
}
