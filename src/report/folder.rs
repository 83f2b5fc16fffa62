//! Writes a result folder as one act: everything goes into a temporary folder beside the target, which is
//! then renamed into place. Whatever fails, the previous result stays.

use super::json::Json;
use super::{OutFile, Provenance, ReportError};
use sha2::{Digest, Sha256};
use std::ffi::OsString;
use std::path::{Path, PathBuf};
use std::{fs, io};

/// Why a result folder could not be written.
#[derive(Debug, thiserror::Error)]
pub enum FolderError {
    /// Something else stands where the results should go.
    #[error("{} {what}: it is left as it is; choose another folder with -o", path.display())]
    NotOurs {
        /// The target.
        path: PathBuf,
        /// What it is.
        what: &'static str,
    },
    /// The folder cannot be made or written to.
    #[error("cannot write results to {}: {source}", path.display())]
    Unwritable {
        /// The target.
        path: PathBuf,
        /// Why.
        source: io::Error,
    },
    /// Writing failed half-way; the previous result is untouched.
    #[error("cannot write {}: {source} (a previous result is untouched)", path.display())]
    Failed {
        /// What was being written.
        path: PathBuf,
        /// Why.
        source: io::Error,
    },
    /// The manifest could not be made.
    #[error(transparent)]
    Report(#[from] ReportError),
}

/// A result folder in the making. Dropped without [`commit`](Self::commit), it leaves no trace.
#[derive(Debug)]
pub struct ResultFolder {
    target: PathBuf,
    temporary: PathBuf,
    /// Parent folders that did not exist before, outermost first.
    made: Vec<PathBuf>,
    done: bool,
}

impl ResultFolder {
    /// Makes sure, before the run, that results can be written to `target`.
    ///
    /// # Errors
    /// [`FolderError::NotOurs`] when something else stands there, [`FolderError::Unwritable`] when nothing can.
    pub fn prepare(target: &Path) -> Result<Self, FolderError> {
        let unwritable = |source| FolderError::Unwritable { path: target.to_owned(), source };
        // A link keeps pointing where it points: its goal is replaced.
        let resolved = fs::canonicalize(target).unwrap_or_else(|_| target.to_owned());
        check_ours(&resolved, target)?;
        let name = resolved
            .file_name()
            .ok_or_else(|| unwritable(io::Error::new(io::ErrorKind::InvalidInput, "it has no name of its own")))?;
        let parent = match resolved.parent() {
            Some(p) if !p.as_os_str().is_empty() => p.to_owned(),
            _ => PathBuf::from("."),
        };
        let made = make_parents(&parent).map_err(unwritable)?;
        let temporary = parent.join(beside(name, "partial"));
        let mut folder = Self { target: resolved.clone(), temporary, made, done: false };
        if let Err(source) = fs::create_dir(&folder.temporary) {
            folder.temporary = PathBuf::new();
            return Err(unwritable(source));
        }
        Ok(folder)
    }

    /// Writes `files` and a manifest, and puts them in place of what was there.
    ///
    /// # Errors
    /// [`FolderError::Failed`], with the previous result still in place.
    pub fn commit(mut self, mut files: Vec<OutFile>, provenance: &Provenance) -> Result<PathBuf, FolderError> {
        files.push(OutFile::new("manifest.json", manifest_json(&files, provenance)?));
        for file in &files {
            let path = self.temporary.join(&file.path);
            let failed = |source| FolderError::Failed { path: self.target.join(&file.path), source };
            if let Some(parent) = path.parent() {
                fs::create_dir_all(parent).map_err(failed)?;
            }
            fs::write(&path, &file.bytes).map_err(failed)?;
        }
        self.swap()?;
        self.done = true;
        Ok(self.target.clone())
    }

    /// Renames the temporary folder into place; files of other origin in the old folder are carried over.
    fn swap(&self) -> Result<(), FolderError> {
        let failed = |source| FolderError::Failed { path: self.target.clone(), source };
        if !self.target.exists() {
            return fs::rename(&self.temporary, &self.target).map_err(failed);
        }
        let name = self.target.file_name().unwrap_or_default();
        let old = self.target.with_file_name(beside(name, "previous"));
        fs::rename(&self.target, &old).map_err(failed)?;
        if let Err(source) = fs::rename(&self.temporary, &self.target) {
            // Back to where we were; should even that fail, the old result still stands beside.
            fs::rename(&old, &self.target).map_err(failed)?;
            return Err(failed(source));
        }
        // A file that cannot be carried over keeps the old folder alive.
        if carry_over(&old, &self.target).is_ok() {
            // What cannot be deleted does no harm.
            fs::remove_dir_all(&old).ok();
        }
        Ok(())
    }
}

impl Drop for ResultFolder {
    fn drop(&mut self) {
        if self.done {
            return;
        }
        if !self.temporary.as_os_str().is_empty() {
            fs::remove_dir_all(&self.temporary).ok();
        }
        // Only empty folders go: others have begun to use them.
        for parent in self.made.iter().rev() {
            fs::remove_dir(parent).ok();
        }
    }
}

fn beside(name: &std::ffi::OsStr, what: &str) -> OsString {
    let mut out = OsString::from(".");
    out.push(name);
    out.push(format!(".{what}-{}", std::process::id()));
    out
}

/// Makes `parent` and tells which folders were missing, outermost first.
fn make_parents(parent: &Path) -> io::Result<Vec<PathBuf>> {
    let mut missing: Vec<PathBuf> = parent
        .ancestors()
        .filter(|p| !p.as_os_str().is_empty())
        .take_while(|p| !p.exists())
        .map(Path::to_owned)
        .collect();
    missing.reverse();
    let mut made = Vec::new();
    for folder in missing {
        if let Err(e) = fs::create_dir(&folder) {
            for done in made.iter().rev() {
                fs::remove_dir(done).ok();
            }
            return Err(e);
        }
        made.push(folder);
    }
    Ok(made)
}

/// Refuses a target that holds something else than a result of this program.
fn check_ours(resolved: &Path, target: &Path) -> Result<(), FolderError> {
    let not_ours = |what| Err(FolderError::NotOurs { path: target.to_owned(), what });
    let unwritable = |source| FolderError::Unwritable { path: target.to_owned(), source };
    // Replacing it would pull the ground from under the user's shell.
    if std::env::current_dir().is_ok_and(|here| here.starts_with(resolved)) {
        return not_ours("is the current folder or holds it");
    }
    match fs::symlink_metadata(resolved) {
        Err(e) if e.kind() == io::ErrorKind::NotFound => return Ok(()),
        Err(e) => return Err(unwritable(e)),
        Ok(meta) if !meta.is_dir() => return not_ours("is not a folder"),
        Ok(_) => {}
    }
    if fs::read_dir(resolved).map_err(unwritable)?.next().is_none() {
        return Ok(());
    }
    match read_manifest(resolved) {
        Some(_) => Ok(()),
        None => not_ours("holds files that wane did not write"),
    }
}

/// The files that the manifest of a result of this program lists; `None` when it is no such folder.
fn read_manifest(folder: &Path) -> Option<Vec<String>> {
    let bytes = fs::read(folder.join("manifest.json")).ok()?;
    let value: serde_json::Value = serde_json::from_slice(&bytes).ok()?;
    if value.get("program")?.as_str()? != "wane" {
        return None;
    }
    let files = value.get("files")?.as_array()?;
    Some(files.iter().filter_map(|f| f.get("path")?.as_str().map(str::to_owned)).collect())
}

/// Moves what the user has put into the old folder into the new one.
fn carry_over(old: &Path, new: &Path) -> io::Result<()> {
    let ours = read_manifest(old).unwrap_or_default();
    move_foreign(old, new, Path::new(""), &ours)
}

fn move_foreign(old: &Path, new: &Path, inside: &Path, ours: &[String]) -> io::Result<()> {
    for entry in fs::read_dir(old.join(inside))? {
        let entry = entry?;
        let relative = inside.join(entry.file_name());
        let written = relative.to_string_lossy().replace('\\', "/");
        if written == "manifest.json" || ours.contains(&written) {
            continue;
        }
        let prefix = format!("{written}/");
        if entry.file_type()?.is_dir() && ours.iter().any(|f| f.starts_with(&prefix)) {
            move_foreign(old, new, &relative, ours)?;
            continue;
        }
        let goal = new.join(&relative);
        if goal.exists() {
            return Err(io::ErrorKind::AlreadyExists.into());
        }
        if let Some(parent) = goal.parent() {
            fs::create_dir_all(parent)?;
        }
        fs::rename(entry.path(), goal)?;
    }
    Ok(())
}

/// `manifest.json`: where the results come from, and the digest of each file. It holds no time of day.
///
/// # Errors
/// When the JSON writer fails.
pub fn manifest_json(files: &[OutFile], provenance: &Provenance) -> Result<Vec<u8>, ReportError> {
    let mut entries = provenance.entries();
    let settings = provenance.settings.iter().map(|(key, value)| (key.clone(), Json::text(value.as_str())));
    entries.push(("settings".to_owned(), Json::object(settings)));
    let listed = files.iter().map(|f| {
        Json::object([
            ("path", Json::text(f.path.as_str())),
            ("bytes", Json::Count(f.bytes.len() as u64)),
            ("sha256", Json::text(hex_sha256(&f.bytes))),
        ])
    });
    entries.push(("files".to_owned(), Json::List(listed.collect())));
    Ok(Json::Object(entries).to_bytes()?)
}

fn hex_sha256(bytes: &[u8]) -> String {
    use std::fmt::Write as _;
    Sha256::digest(bytes).iter().fold(String::with_capacity(64), |mut out, byte| {
        write!(out, "{byte:02x}").ok();
        out
    })
}
