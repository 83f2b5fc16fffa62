//! From a path to a text: each way in which that can fail has its own message.

use super::guess::guess;
use super::problem::Problems;
use std::io::{self, Read};
use std::path::Path;

/// No scenario is longer; what is, is something else.
const LARGEST_BYTES: u64 = 16 << 20;

/// Why a scenario file could not be loaded.
#[derive(Debug, thiserror::Error)]
pub enum LoadError {
    /// There is no such file.
    #[error("there is no file {path}{}", hint(near))]
    Missing {
        /// The path as given.
        path: String,
        /// A file of a similar name in the same folder.
        near: Option<String>,
    },
    /// It is a directory.
    #[error("{path} is a directory, a scenario file is expected{}", hint(inside))]
    Directory {
        /// The path as given.
        path: String,
        /// The one scenario in it, if there is just one.
        inside: Option<String>,
    },
    /// It is neither a file nor a directory.
    #[error("{path} is not a regular file")]
    NotAFile {
        /// The path as given.
        path: String,
    },
    /// The system refuses.
    #[error("{path} cannot be read: {source}")]
    Unreadable {
        /// The path as given.
        path: String,
        /// Why.
        source: io::Error,
    },
    /// It holds nothing.
    #[error("{path} is empty (`wane new DIR` writes a scenario to start from)")]
    Empty {
        /// The path as given.
        path: String,
    },
    /// It holds bytes that no text has.
    #[error("{path} is not a text file: byte {offset} is zero{}", if *utf16 { " (UTF-16? save it as UTF-8)" } else { "" })]
    Binary {
        /// The path as given.
        path: String,
        /// Offset of the first zero byte.
        offset: usize,
        /// Whether it begins as UTF-16 text does.
        utf16: bool,
    },
    /// It is not UTF-8.
    #[error("{path}:{line}:{column}: byte 0x{byte:02x} is not valid UTF-8 (save the file as UTF-8)")]
    NotUtf8 {
        /// The path as given.
        path: String,
        /// Line of the first wrong byte, from one.
        line: usize,
        /// Its column, from one.
        column: usize,
        /// The byte.
        byte: u8,
    },
    /// It is too large to be a scenario.
    #[error("{path} is larger than {} megabytes, which no scenario is", LARGEST_BYTES >> 20)]
    TooLarge {
        /// The path as given.
        path: String,
    },
    /// It is text, but no TOML.
    #[error("{0}")]
    Problems(#[from] Problems),
}

/// Reads the text of a scenario file.
pub(super) fn read_text(file: &Path) -> Result<String, LoadError> {
    let path = file.display().to_string();
    let kind = match std::fs::metadata(file) {
        Ok(kind) => kind,
        Err(error) if error.kind() == io::ErrorKind::NotFound => {
            return Err(LoadError::Missing { path, near: near(file) });
        }
        Err(source) => return Err(LoadError::Unreadable { path, source }),
    };
    if kind.is_dir() {
        return Err(LoadError::Directory { path, inside: only_scenario(file) });
    }
    if !kind.is_file() {
        return Err(LoadError::NotAFile { path });
    }
    let mut bytes = Vec::new();
    let read = std::fs::File::open(file).and_then(|opened| opened.take(LARGEST_BYTES + 1).read_to_end(&mut bytes));
    if let Err(source) = read {
        return Err(LoadError::Unreadable { path, source });
    }
    if bytes.len() as u64 > LARGEST_BYTES {
        return Err(LoadError::TooLarge { path });
    }
    let utf16 = bytes.starts_with(&[0xff, 0xfe]) || bytes.starts_with(&[0xfe, 0xff]);
    if let Some(offset) = bytes.iter().position(|byte| *byte == 0) {
        return Err(LoadError::Binary { path, offset, utf16 });
    }
    let text = match String::from_utf8(bytes) {
        Ok(text) => text,
        Err(error) => {
            let valid = error.utf8_error().valid_up_to();
            let bytes = error.as_bytes();
            let before = String::from_utf8_lossy(&bytes[..valid]);
            return Err(LoadError::NotUtf8 {
                path,
                line: before.matches('\n').count() + 1,
                column: before.rsplit('\n').next().unwrap_or("").chars().count() + 1,
                byte: bytes.get(valid).copied().unwrap_or(0),
            });
        }
    };
    if text.trim_start_matches('\u{feff}').trim().is_empty() {
        return Err(LoadError::Empty { path });
    }
    Ok(text)
}

fn hint(near: &Option<String>) -> String {
    near.as_ref().map_or_else(String::new, |near| format!(" (did you mean {near}?)"))
}

fn names_in(folder: &Path) -> Vec<String> {
    let folder = if folder.as_os_str().is_empty() { Path::new(".") } else { folder };
    let entries = std::fs::read_dir(folder).into_iter().flatten().take(10_000).flatten();
    let mut names: Vec<String> = entries.filter_map(|entry| entry.file_name().into_string().ok()).collect();
    names.sort();
    names
}

fn near(file: &Path) -> Option<String> {
    let folder = file.parent()?;
    let wanted = file.file_name()?.to_str()?;
    let names: Vec<String> = names_in(folder).into_iter().filter(|name| name.ends_with(".toml")).collect();
    let name = guess(wanted, names.iter().map(String::as_str))?;
    Some(folder.join(name).display().to_string())
}

fn only_scenario(folder: &Path) -> Option<String> {
    let mut names = names_in(folder).into_iter().filter(|name| name.ends_with(".toml"));
    let only = names.next()?;
    names.next().is_none().then(|| folder.join(only).display().to_string())
}
