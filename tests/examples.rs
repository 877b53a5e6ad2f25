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
    assert!((tenth.difference(0.1) - 5.551_115_123_125_782_7e-18).abs() < 1e-32);
    // The same digits in every notation.
    for text in ["1e-1", "+0.1", ".1", "0.1000", "100E-3", "0.00000000001e+10", "1000e-4"] {
        let other = Reference::parse(text).expect(text);
        assert_eq!(other.value(), 0.1, "{text}");
        assert!((other.difference(0.1) - 5.551_115_123_125_782_7e-18).abs() < 1e-31, "{text}");
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
