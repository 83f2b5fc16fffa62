//! The result folder: all or nothing, and nobody else's files.
#![allow(clippy::unwrap_used)]

mod common;
mod report_support;

use common::all;
use report_support as made;
use std::fs;
use std::path::Path;
use wane::report::OutFile;
use wane::report::folder::{FolderError, ResultFolder};

fn files(text: &str) -> Vec<OutFile> {
    vec![OutFile::new("profile.csv", text.into()), OutFile::new("case/profile.csv", text.into())]
}

fn write(target: &Path, text: &str) {
    ResultFolder::prepare(target).unwrap().commit(files(text), &made::provenance()).unwrap();
}

#[test]
fn results_appear_as_one_with_a_manifest() {
    let dir = tempfile::tempdir().unwrap();
    let target = dir.path().join("results/heron");
    write(&target, "one");
    let found = all(dir.path());
    let names: Vec<&str> = found.keys().map(String::as_str).collect();
    assert_eq!(
        names,
        [
            "results/",
            "results/heron/",
            "results/heron/case/",
            "results/heron/case/profile.csv",
            "results/heron/manifest.json",
            "results/heron/profile.csv"
        ]
    );
    let manifest: serde_json::Value = serde_json::from_slice(&found["results/heron/manifest.json"]).unwrap();
    assert_eq!((manifest["program"].as_str(), manifest["case"].as_str()), (Some("wane"), Some("base")));
    assert_eq!(manifest["settings"]["tubing"], "hasan-kabir");
    assert_eq!(manifest["files"][0]["path"], "profile.csv");
    // SHA-256 of "one", from coreutils' sha256sum.
    let digest = "7692c3ad3540bb803c020b3aee66cd8887123234ea0c6e7143c0add73ff431ed";
    assert_eq!(manifest["files"][0]["sha256"], digest);
}

#[test]
fn a_second_run_replaces_the_first_and_keeps_the_users_own_files() {
    let dir = tempfile::tempdir().unwrap();
    let target = dir.path().join("heron");
    write(&target, "one");
    fs::write(target.join("notes.txt"), "mine").unwrap();
    fs::write(target.join("case/more.txt"), "mine too").unwrap();
    ResultFolder::prepare(&target)
        .unwrap()
        .commit(vec![OutFile::new("profile.csv", b"two".to_vec())], &made::provenance())
        .unwrap();
    let found = all(dir.path());
    assert_eq!(found["heron/profile.csv"], b"two");
    assert_eq!(found["heron/notes.txt"], b"mine");
    assert_eq!(found["heron/case/more.txt"], b"mine too");
    assert!(!found.contains_key("heron/case/profile.csv"), "what the new run did not write is gone");
    assert!(found.keys().all(|k| k.starts_with("heron/")), "no traces beside it: {:?}", found.keys());
}

#[test]
fn a_folder_of_another_program_is_refused_and_left_untouched() {
    let dir = tempfile::tempdir().unwrap();
    let target = dir.path().join("theirs");
    fs::create_dir(&target).unwrap();
    for manifest in [None, Some("{\"program\": \"other\", \"files\": []}"), Some("not json")] {
        fs::write(target.join("profile.csv"), "theirs").unwrap();
        if let Some(text) = manifest {
            fs::write(target.join("manifest.json"), text).unwrap();
        }
        let before = all(dir.path());
        let refused = ResultFolder::prepare(&target);
        assert!(matches!(refused, Err(FolderError::NotOurs { .. })), "{refused:?}");
        assert_eq!(all(dir.path()), before);
    }
    let file = dir.path().join("file");
    fs::write(&file, "a file").unwrap();
    assert!(matches!(ResultFolder::prepare(&file), Err(FolderError::NotOurs { .. })));
    assert_eq!(fs::read(&file).unwrap(), b"a file");
}

#[test]
fn an_empty_folder_may_be_filled() {
    let dir = tempfile::tempdir().unwrap();
    let target = dir.path().join("empty");
    fs::create_dir(&target).unwrap();
    write(&target, "one");
    assert!(target.join("manifest.json").is_file());
}

#[test]
fn a_path_through_a_file_is_reported_before_the_run() {
    let dir = tempfile::tempdir().unwrap();
    fs::write(dir.path().join("file"), "a file").unwrap();
    let before = all(dir.path());
    let refused = ResultFolder::prepare(&dir.path().join("file/inside/heron"));
    assert!(matches!(refused, Err(FolderError::Unwritable { .. })), "{refused:?}");
    assert_eq!(all(dir.path()), before);
}

#[test]
fn a_run_that_fails_leaves_no_trace_and_the_previous_result() {
    let dir = tempfile::tempdir().unwrap();
    let target = dir.path().join("deep/down/heron");
    drop(ResultFolder::prepare(&target).unwrap());
    assert!(all(dir.path()).is_empty(), "folders that were made for nothing are gone");
    write(&target, "one");
    let before = all(dir.path());
    drop(ResultFolder::prepare(&target).unwrap());
    assert_eq!(all(dir.path()), before);
    // A file that cannot be written: its folder is a file.
    let bad = vec![OutFile::new("a", b"x".to_vec()), OutFile::new("a/b", b"x".to_vec())];
    let failed = ResultFolder::prepare(&target).unwrap().commit(bad, &made::provenance());
    assert!(matches!(failed, Err(FolderError::Failed { .. })), "{failed:?}");
    assert_eq!(all(dir.path()), before);
}

#[cfg(unix)]
#[test]
fn a_link_goes_on_pointing_where_it_pointed() {
    let dir = tempfile::tempdir().unwrap();
    let real = dir.path().join("real");
    write(&real, "one");
    let link = dir.path().join("link");
    std::os::unix::fs::symlink(&real, &link).unwrap();
    write(&link, "two");
    assert!(link.is_symlink());
    assert_eq!(fs::read(real.join("profile.csv")).unwrap(), b"two");
}
