//! Reads a CSV table (`#` comment lines, one header line) and hands out its columns; every fault
//! names the line of the file.

use std::fmt;
use std::path::Path;

/// Why a table was refused, in one line.
#[derive(Debug)]
pub struct Fault(pub String);

impl fmt::Display for Fault {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        out.write_str(&self.0)
    }
}

/// The rows of a file as text, with the line that each stands on.
pub struct Table {
    file: String,
    header_line: usize,
    header: csv::StringRecord,
    rows: Vec<(usize, csv::StringRecord)>,
}

impl Table {
    /// Reads a whole file and checks that every row has as many fields as the header.
    pub fn read(path: &Path) -> Result<Table, Fault> {
        let file = path.display().to_string();
        let text = std::fs::read(path).map_err(|error| {
            Fault(format!("{file}: {error}: give the path of a readable CSV file"))
        })?;
        // Checked here, so that the line can be named.
        let text = String::from_utf8(text).map_err(|error| {
            let line = bytes_to_line(&error.as_bytes()[..error.utf8_error().valid_up_to()]);
            Fault(format!("{file}, line {line}: not UTF-8 text: save the table as plain text"))
        })?;
        let mut records = text
            .trim_start_matches('\u{feff}')
            .lines()
            .zip(1..)
            .filter(|(line, _)| !line.starts_with('#') && !line.trim().is_empty())
            .map(|(line, number)| (number, fields(line)));
        let (header_line, header) = records.next().ok_or_else(|| {
            Fault(format!("{file}, line 1: no header line: begin with the column names"))
        })?;
        let rows: Vec<_> = records.collect();
        for (line, row) in &rows {
            if row.len() != header.len() {
                return Err(Fault(format!(
                    "{file}, line {line}: {} fields, but the header (line {header_line}) names {}: \
                     give one field per column",
                    row.len(),
                    header.len()
                )));
            }
        }
        if rows.is_empty() {
            return Err(Fault(format!(
                "{file}, line {header_line}: no rows after the header: add at least one"
            )));
        }
        Ok(Table { file, header_line, header, rows })
    }

    fn column(&self, name: &str) -> Result<usize, Fault> {
        let mut found = self.header.iter().enumerate().filter(|(_, title)| *title == name);
        match (found.next(), found.next()) {
            (Some((index, _)), None) => Ok(index),
            (None, _) => Err(self.fault(
                self.header_line,
                format!("column '{name}' is missing: add it to the header and to every row"),
            )),
            (Some(_), Some(_)) => Err(self.fault(
                self.header_line,
                format!("column '{name}' stands twice: remove or rename one"),
            )),
        }
    }

    /// A column through a function that reads one field; `None` becomes a fault that says what
    /// was `expected`.
    pub fn map<T>(
        &self,
        name: &str,
        expected: &str,
        read: impl Fn(&str) -> Option<T>,
    ) -> Result<Vec<T>, Fault> {
        let index = self.column(name)?;
        let read = |(row, (_, record)): (usize, &(usize, csv::StringRecord))| {
            let field = &record[index];
            read(field).ok_or_else(|| {
                self.fault_at_row(row, format!("column '{name}' holds '{field}': give {expected}"))
            })
        };
        self.rows.iter().enumerate().map(read).collect()
    }

    /// A fault of a row (counted from 0) that names the file and the row's line.
    pub fn fault_at_row(&self, row: usize, message: String) -> Fault {
        self.fault(self.rows[row].0, message)
    }

    fn fault(&self, line: usize, message: String) -> Fault {
        Fault(format!("{}, line {line}: {message}", self.file))
    }

    /// A column of finite numbers.
    pub fn numbers(&self, name: &str) -> Result<Vec<f64>, Fault> {
        self.map(name, "a finite decimal number", |field| {
            field.parse().ok().filter(|x: &f64| x.is_finite())
        })
    }
}

fn bytes_to_line(before: &[u8]) -> usize {
    1 + before.iter().filter(|&&byte| byte == b'\n').count()
}

/// The fields of one line; quotes are understood, fields over several lines are not.
fn fields(line: &str) -> csv::StringRecord {
    let mut reader = csv::ReaderBuilder::new()
        .has_headers(false)
        .trim(csv::Trim::All)
        .from_reader(line.as_bytes());
    // Reading UTF-8 text from memory cannot fail, and one line is one record.
    reader.records().flatten().next().unwrap_or_default()
}
