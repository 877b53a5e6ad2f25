//! The example programs as a user runs them: results, exit codes and one-line refusals.

#[path = "../examples/against_table/reference.rs"]
#[allow(dead_code)] // only the reading of one number is tested here
mod reference;
#[path = "../examples/support/table.rs"]
#[allow(dead_code)]
mod table;

use reference::Reference;
use std::path::{Path, PathBuf};
use std::process::{Command, Output};

/// Runs a compiled example; it lies beside the directory of this test program.
fn run<'a>(example: &str, arguments: impl IntoIterator<Item = &'a str>) -> Output {
    let test = std::env::current_exe().expect("the path of this test program");
    let directory = test.parent().and_then(Path::parent).expect("deps lies in a profile directory");
    let program = directory.join("examples").join(example);
    assert!(
        program.is_file(),
        "{} is missing: `cargo build --examples` makes it",
        program.display()
    );
    Command::new(program).args(arguments).output().expect("the example starts")
}

/// A file of this test's own with the given text.
fn file(name: &str, text: impl AsRef<[u8]>) -> PathBuf {
    let path = Path::new(env!("CARGO_TARGET_TMPDIR")).join(name);
    std::fs::write(&path, text).expect("the temporary directory can be written");
    path
}

fn text(bytes: &[u8]) -> String {
    String::from_utf8_lossy(bytes).into_owned()
}

/// Checks exit code 2, nothing on stdout and one line on stderr with the given words.
fn refused(output: &Output, words: &[&str]) {
    let message = text(&output.stderr);
    assert_eq!(output.status.code(), Some(2), "{message}");
    assert_eq!(message.trim_end().lines().count(), 1, "{message}");
    assert_eq!(text(&output.stdout), "");
    for word in words {
        assert!(message.contains(word), "'{word}' is not in: {message}");
    }
}

fn against_table(name: &str, path: &Path) -> Output {
    run("against_table", [name, path.to_str().expect("a UTF-8 path")])
}

/// The number after `label` on the line that begins with `start`.
fn figure(output: &str, start: &str, label: &str) -> f64 {
    let line = output.lines().find(|line| line.starts_with(start));
    let line = line.unwrap_or_else(|| panic!("no line '{start}' in: {output}"));
    let field = line.split_whitespace().find_map(|word| word.strip_prefix(label));
    let field = field.unwrap_or_else(|| panic!("no '{label}' in: {line}"));
    field.parse().unwrap_or_else(|_| panic!("not a number: {field}"))
}

// Ai(0), Ai'(0), Bi(0), Bi'(0): DLMF 9.2.3 to 9.2.6, evaluated with 60-digit Gamma functions.
const AT_ZERO: &str = "0.3550280538878172392601,-0.2588194037928067984052,\
                       0.6149266274460007351509,0.4482883573538263579148";

#[test]
fn right_values_have_small_errors() {
    let path = file("right.csv", format!("# comment\n\nx,ai,aip,bi,bip\n0.0,{AT_ZERO}\n"));
    let output = against_table("airy_real", &path);
    assert!(output.status.success(), "{}", text(&output.stderr));
    let output = text(&output.stdout);
    for quantity in ["ai", "aip", "bi", "bip"] {
        let start = format!("airy_real {quantity} ");
        assert_eq!(figure(&output, &start, "rows="), 1.0);
        assert!(figure(&output, &start, "max=") < 1e-15, "{output}");
    }
    assert!(figure(&output, "airy_real ns_per_row", "ns_per_row=") > 0.0);
}

#[test]
fn wrong_values_have_their_errors() {
    let wrong = AT_ZERO.replace("-0.2588194", "-0.2588195");
    let path = file("wrong.csv", format!("x,ai,aip,bi,bip\n0.0,{AT_ZERO}\n0.0,{wrong}\n"));
    let output = text(&against_table("airy_real", &path).stdout);
    // The scale of Ai' at 0 is Ai(0) = 0.355, the larger of the two.
    let error = figure(&output, "airy_real aip ", "max=");
    assert!((error - 1e-7 / 0.355).abs() < 0.02e-7, "{output}");
    assert!(figure(&output, "airy_real aip ", "median=") < 1e-15, "{output}");
    assert!(figure(&output, "airy_real ai ", "max=") < 1e-15, "{output}");
}

#[test]
fn malformed_tables_are_refused_by_line() {
    let header = "x,ai,aip,bi,bip";
    let cases = [
        ("field_count", format!("{header}\n0.0,1,2,3\n"), vec!["line 2", "4 fields", "5"]),
        ("not_a_number", format!("{header}\n0.0,1,2,3,4\n0.0,1,two,3,4\n"), vec!["line 3", "two"]),
        ("nan_input", format!("{header}\nNaN,1,2,3,4\n"), vec!["line 2", "NaN"]),
        ("infinite", format!("# one\n{header}\n0,1,2,3,1e999\n"), vec!["line 3", "1e999"]),
        ("missing_column", "# one\n# two\nx,ai,aip,bi\n0,1,2,3\n".into(), vec!["line 3", "bip"]),
        ("twice", "x,ai,aip,bi,bip,x\n0,1,2,3,4,5\n".into(), vec!["line 1", "'x'", "twice"]),
        ("no_rows", format!("{header}\n# nothing\n"), vec!["line 1", "no rows"]),
        ("empty", String::new(), vec!["line 1", "header"]),
    ];
    for (name, content, words) in cases {
        let path = file(&format!("{name}.csv"), content);
        refused(&against_table("airy_real", &path), &words);
    }
    let path = file("bytes.csv", b"x,ai\n0,1\n\xff\xfe,2\n");
    refused(&against_table("airy_real", &path), &["line 3", "UTF-8"]);
}

#[test]
fn wrong_command_lines_are_refused() {
    let path = file("fine.csv", format!("x,ai,aip,bi,bip\n0.0,{AT_ZERO}\n"));
    refused(&against_table("airy_unreal", &path), &["airy_unreal", "airy_complex"]);
    refused(&against_table("airy_real", Path::new("no/such.csv")), &["no/such.csv", "give"]);
    refused(&against_table("airy_real", Path::new(".")), &["give"]);
    refused(&run("against_table", ["airy_real"]), &["FILE", "--help"]);
    refused(&run("against_table", ["--fast"]), &["--fast", "--help"]);
}

#[test]
fn reference_values_keep_more_digits_than_a_double() {
    // 0.1 as a double is 0.1000000000000000055511151231257827..: exact binary expansion.
    let tenth = Reference::parse("0.1").expect("a number");
    assert_eq!(tenth.value(), 0.1);
    assert!((tenth.difference(0.1) - 5.551_115_123_125_783e-18).abs() < 1e-32);
    // The same digits in every notation.
    for text in ["1e-1", "+0.1", ".1", "0.1000", "100E-3", "0.00000000001e+10", "1000e-4"] {
        let other = Reference::parse(text).expect(text);
        assert_eq!(other.value(), 0.1, "{text}");
        assert!((other.difference(0.1) - 5.551_115_123_125_783e-18).abs() < 1e-31, "{text}");
    }
    // 2^-53 beside 1: 1.00000000000000011102230246251565404 exactly.
    let one = Reference::parse("-1.00000000000000011102230246251565404").expect("a number");
    assert!((one.difference(-1.0) - 2f64.powi(-53)).abs() < 1e-31);
    for text in ["1e-290", "2.5e300", "-7.123456789012345678e-250", "12345678901234567890123e20"] {
        let nearest: f64 = text.parse().expect(text);
        assert_eq!(Reference::parse(text).expect(text).value(), nearest, "{text}");
    }
    for text in ["", "abc", "1.2.3", "nan", "inf", "1e400", "0x10", "1e", "--1", "1 2"] {
        assert_eq!(Reference::parse(text), None, "{text}");
    }
}

#[test]
fn the_fold_table_is_measured() {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/data/uniform_field.csv");
    let output = text(&against_table("uniform_field", &path).stdout);
    assert_eq!(figure(&output, "uniform_field orders_chosen ", "rows="), 198.0);
    let covers = output.lines().filter_map(|line| line.split("figure_covers=").nth(1));
    assert_eq!(covers.map(|rest| &rest[..6]).collect::<Vec<_>>(), ["1.0000", "1.0000"]);
    let path = file("weights.csv", "k,a,g_id,re,im\n10,0.1,two,0,1\n");
    refused(&against_table("uniform_field", &path), &["line 2", "g_id", "two", "cosh3"]);
    let path = file("negative_k.csv", "k,a,g_id,re,im\n-10,0.1,one,0,1\n");
    refused(&against_table("uniform_field", &path), &["line 2", "'k'", "-10"]);
}

/// The shelf program on a small picture, with further arguments.
fn shelf(output: &Path, arguments: &[&str]) -> Output {
    let output = output.to_str().expect("a UTF-8 path");
    let small = ["--columns", "12", "--rows", "10", "--output", output];
    run("shelf_cutoff", small.into_iter().chain(arguments.iter().copied()))
}

/// A path for a picture that no earlier run has left behind.
fn picture(name: &str) -> PathBuf {
    let path = Path::new(env!("CARGO_TARGET_TMPDIR")).join(name);
    match std::fs::remove_file(&path) {
        Err(error) if error.kind() != std::io::ErrorKind::NotFound => panic!("{error}"),
        _ => path,
    }
}

/// No picture and no unfinished one.
fn nothing_written(path: &Path) {
    assert!(!path.exists(), "{} was written", path.display());
    let part = PathBuf::from(format!("{}.part", path.display()));
    assert!(!part.exists(), "{} was left behind", part.display());
}

#[test]
fn the_shelf_is_followed_through_cut_off() {
    let path = picture("shelf.svg");
    let output = shelf(&path, &["--point", "4828.4,20"]);
    assert!(output.status.success(), "{}", text(&output.stderr));
    let output = text(&output.stdout);
    // (n - 1/2) pi/sqrt(k_w^2 - k_b^2) for n = 2 and the options' defaults: common practice.
    let q = 2.0 * std::f64::consts::PI * 100.0 * (1500f64.powi(-2) - 1650f64.powi(-2)).sqrt();
    let depth = 1.5 * std::f64::consts::PI / q;
    let row = output.lines().find(|line| line.starts_with("    2 ")).expect("a row for mode 2");
    let fields: Vec<f64> = row.split_whitespace().filter_map(|x| x.parse().ok()).collect();
    assert!((fields[2] - depth).abs() < 0.006, "{row}");
    // [((c_b/c_w)^2 - 1) (rho_b/rho_w) slope]^(1/3) is the sine of the beam's angle: derived.
    let sine = ((1.1f64 * 1.1 - 1.0) * 1.8 / fields[3]).cbrt();
    assert!((fields[5] - sine.asin().to_degrees()).abs() < 0.02, "{row}");
    assert!(output.contains("licensed practice"), "{output}");
    // Range, depth, level and figure at the saddles (unless refused), level and figure of the
    // yardstick, their distance (unless refused).
    let rows: Vec<Vec<f64>> = output
        .lines()
        .filter(|line| line.contains(" water ") || line.contains(" bottom "))
        .map(|line| line.split_whitespace().filter_map(|x| x.parse().ok()).collect())
        .filter(|row: &Vec<f64>| row.len() == 4 || row.len() == 7)
        .collect();
    assert_eq!(rows.len(), 23, "{output}");
    let yardstick = |row: &[f64]| -> [f64; 2] {
        if row.len() == 7 { [row[4], row[5]] } else { [row[2], row[3]] }
    };
    for row in &rows {
        assert!(yardstick(row)[1] < 1e-7, "{row:?}");
        if row.len() == 7 {
            assert!(row[6] <= row[3], "the figure at the saddles covers: {row:?}");
        }
    }
    assert!(rows.iter().any(|row| row.len() == 7 && row[6] < 1e-6), "{output}");
    // Trapped before, all but gone from the water after.
    assert!(yardstick(&rows[0])[0].abs() < 1.0, "{output}");
    let last = rows.iter().rfind(|row| row[1] < 6.0).expect("a last row in the water");
    assert!(yardstick(last)[0] < -20.0, "{output}");
    // The point asked for stands last.
    assert_eq!(rows[22][..2], [4828.4, 20.0]);
    let svg = std::fs::read_to_string(&path).expect("the picture");
    assert!(svg.starts_with("<svg") && svg.trim_end().ends_with("</svg>"));
    for label in ["range along the track (m)", "depth below the surface (m)", "level (dB)"] {
        assert!(svg.contains(label), "{label} is not in the picture");
    }
}

#[test]
fn wrong_shelves_are_refused() {
    let header = "range_m,depth_m";
    let cases = [
        ("rising", format!("{header}\n0,50\n100,60\n200,20\n"), vec!["line 3", "60", "rises"]),
        ("unsorted", format!("{header}\n0,50\n200,40\n100,20\n"), vec!["line 4", "100", "sort"]),
        ("dry", format!("# sea\n{header}\n0,50\n200,-1\n"), vec!["line 4", "-1", "depth"]),
        ("single", format!("{header}\n0,50\n"), vec!["line 2", "two"]),
        ("words", format!("{header}\n0,deep\n100,20\n"), vec!["line 2", "deep"]),
        ("fields", format!("{header}\n0,50,1\n100,20\n"), vec!["line 2", "3 fields"]),
        ("title", "range_m,depth\n0,50\n100,20\n".into(), vec!["line 1", "depth_m"]),
        ("deep", format!("{header}\n0,50\n1000,49\n"), vec!["cut-off", "--frequency-hz"]),
        ("shallow", format!("{header}\n0,5\n1000,4\n"), vec!["trapped", "--frequency-hz"]),
    ];
    for (name, content, words) in cases {
        let profile = file(&format!("{name}_shelf.csv"), content);
        let path = picture(&format!("{name}_shelf.svg"));
        refused(&shelf(&path, &["--profile", profile.to_str().expect("a UTF-8 path")]), &words);
        nothing_written(&path);
    }
    let options: [(&[&str], &[&str]); 9] = [
        (&["--profile", "no/such.csv"], &["no/such.csv", "give"]),
        (&["--bottom-speed", "1450"], &["1450", "faster"]),
        (&["--frequency-hz", "-5"], &["-5", "above zero"]),
        (&["--frequency-hz", "soft"], &["soft", "--help"]),
        (&["--frequency-hz", "1e9"], &["modes", "--frequency-hz"]),
        (&["--attenuation", "-0.1"], &["-0.1", "attenuation"]),
        (&["--mode", "9"], &["mode 9", "from 2 to 6"]),
        (&["--point", "5000"], &["5000", "two numbers"]),
        (&["--louder"], &["--louder", "--help"]),
    ];
    for (arguments, words) in options {
        let path = picture("refused.svg");
        refused(&shelf(&path, arguments), words);
        nothing_written(&path);
    }
    refused(&run("shelf_cutoff", ["--rows", "1"]), &["--rows", "10"]);
    let directory = Path::new(env!("CARGO_TARGET_TMPDIR"));
    refused(&shelf(directory, &[]), &["--output"]);
    let below_a_file = file("plain.txt", "text").join("picture.svg");
    refused(&shelf(&below_a_file, &[]), &["--output"]);
}

#[test]
fn the_taper_leaks_and_the_well_releases() {
    for (example, refusal, words, labels) in [
        (
            "taper_leak",
            ["--mode", "0"],
            ["mode 0", "any width"],
            ["along the taper (um)", "edge of the core"],
        ),
        ("well_release", ["--to", "9"], ["--to", "narrows"], ["time (hbar/V)", "wall of the well"]),
    ] {
        let path = picture(&format!("{example}.svg"));
        let file = path.to_str().expect("a UTF-8 path");
        let small = ["--columns", "12", "--rows", "10", "--output", file];
        let output = run(example, small);
        assert!(output.status.success(), "{}", text(&output.stderr));
        let output = text(&output.stdout);
        // What is left inside falls from row to row, from more than half to less than 1 %.
        let inside: Vec<f64> = output
            .lines()
            .filter(|line| line.contains(" % "))
            .filter_map(|line| line.split_whitespace().nth(1)?.parse().ok())
            .collect();
        assert!(
            inside.len() >= 8 && inside[0] > 50.0 && inside[inside.len() - 1] < 1.0,
            "{output}"
        );
        assert!(inside.windows(2).all(|pair| pair[1] < pair[0]), "{output}");
        let svg = std::fs::read_to_string(&path).expect("the picture");
        assert!(svg.starts_with("<svg") && labels.iter().all(|label| svg.contains(label)));
        let path = picture("refused.svg");
        let file = path.to_str().expect("a UTF-8 path");
        refused(&run(example, refusal.into_iter().chain(["--output", file])), &words);
        nothing_written(&path);
    }
}
