//! Files that are written whole or not at all.

use crate::table::Fault;
use std::path::Path;

/// Checks that the picture can be written before any work is done.
pub fn prepare(path: &Path) -> Result<(), Fault> {
    let refuse = |reason: String| {
        Fault(format!("{}: {reason}: give --output a path that can be written", path.display()))
    };
    if path.is_dir() || path.file_name().is_none() {
        return Err(refuse("not the name of a file".into()));
    }
    match path.parent() {
        Some(directory) if !directory.as_os_str().is_empty() => {
            std::fs::create_dir_all(directory).map_err(|error| refuse(error.to_string()))
        }
        _ => Ok(()),
    }
}

/// Writes under another name first, so that no half picture is ever found under this one.
pub fn write_whole(path: &Path, text: &str) -> Result<(), Fault> {
    let mut name = path.file_name().unwrap_or_default().to_os_string();
    name.push(".part");
    let part = path.with_file_name(name);
    std::fs::write(&part, text).and_then(|()| std::fs::rename(&part, path)).map_err(|error| {
        // The unfinished file may not even exist.
        let _ = std::fs::remove_file(&part);
        Fault(format!("{}: {error}: give --output a path that can be written", path.display()))
    })
}
