//! Files out: whole or not at all. What was there is replaced only when the new file is complete.

use std::fs::{self, File};
use std::io::{self, Write as _};
use std::path::Path;

/// Writes a file; a half-written one is never left.
///
/// # Errors
/// The folder is not there or cannot be written to, the disk is full.
pub fn write(path: &Path, content: &[u8]) -> io::Result<()> {
    let Some(name) = path.file_name() else {
        return Err(io::Error::new(io::ErrorKind::InvalidInput, "is no name of a file"));
    };
    let mut part = std::ffi::OsString::from(".");
    part.push(name);
    part.push(format!(".{}.part", std::process::id()));
    let part = path.with_file_name(part);
    let written = File::create_new(&part).and_then(|mut file| {
        file.write_all(content)?;
        file.sync_all()?;
        fs::rename(&part, path)
    });
    if written.is_err() {
        // The failure itself is what the caller needs to hear.
        drop(fs::remove_file(&part));
    }
    written
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_file_is_replaced_whole() {
        let folder = tempfile::tempdir().expect("a folder");
        let path = folder.path().join("report.md");
        write(&path, b"old and long").expect("new");
        write(&path, b"new").expect("replaced");
        assert_eq!(fs::read(&path).expect("is there"), b"new");
        assert!(write(&folder.path().join("none/report.md"), b"x").is_err());
        fs::create_dir(folder.path().join("taken.md")).expect("a folder");
        assert!(write(&folder.path().join("taken.md"), b"x").is_err());
        let left = fs::read_dir(folder.path()).expect("a folder").count();
        assert_eq!(left, 2, "no part is left");
    }
}
