//! Who may write to a run folder, and what may be deleted in it.

use std::fs;
use std::path::Path;

use tempfile::TempDir;

use somadawn::record::{Fault, RecordError, RunFolder, RunRecorder};

use crate::record_sample::{another_identity, ending, identity, onset, record};

fn temporary() -> TempDir {
    tempfile::tempdir().expect("a temporary folder")
}

/// Leaves a finished run of `identity()` in `path`.
fn finished_run(path: &Path) {
    run_of(path, 1);
}

/// Leaves a run of `identity()` in `path` of which one of `planned` replicates has finished.
fn run_of(path: &Path, planned: u32) {
    let mut run = RunRecorder::start(RunFolder::open(path, identity(), false).unwrap()).unwrap();
    run.add(record(onset(0, 100.0))).unwrap();
    run.finish(&ending(planned)).unwrap();
}

fn names(path: &Path) -> Vec<String> {
    let mut names: Vec<String> = fs::read_dir(path)
        .unwrap()
        .map(|entry| entry.unwrap().file_name().into_string().unwrap())
        .collect();
    names.sort();
    names
}

#[test]
fn a_new_folder_is_made_with_its_parents() {
    let folder = temporary();
    let path = folder.path().join("a/b");
    let open = RunFolder::open(&path, identity(), false).unwrap();
    assert!(open.earlier().is_none());
    assert_eq!(names(&path), [".lock"]);
}

#[test]
fn the_same_run_may_return_finished_or_not() {
    let folder = temporary();
    drop(RunFolder::open(folder.path(), identity(), false).unwrap());
    drop(RunFolder::open(folder.path(), identity(), false).unwrap());
    finished_run(folder.path());
    fs::write(folder.path().join("notes.txt"), "mine").unwrap();
    let again = RunFolder::open(folder.path(), identity(), false).unwrap();
    assert!(again.earlier().is_some_and(|manifest| manifest.complete));
    drop(again);
    let anew = RunFolder::open(folder.path(), identity(), true).unwrap();
    assert!(anew.earlier().is_none());
    assert!(folder.path().join("notes.txt").exists());
}

#[test]
fn an_unfinished_run_goes_on_even_where_finished_ones_are_replaced() {
    let folder = temporary();
    run_of(folder.path(), 2);
    for replace in [false, true] {
        let again = RunFolder::open(folder.path(), identity(), replace).unwrap();
        assert!(again.earlier().is_some_and(|run| run.replicates_finished == [0]), "{replace}");
    }
    let another = RunFolder::open(folder.path(), another_identity(), true).unwrap();
    assert!(another.earlier().is_none());
}

#[test]
fn another_run_is_refused_unless_it_is_to_be_replaced() {
    let folder = temporary();
    finished_run(folder.path());
    let before = names(folder.path());
    let refused = RunFolder::open(folder.path(), another_identity(), false).unwrap_err();
    assert!(matches!(refused, RecordError::AnotherRun { .. }), "{refused}");
    assert_eq!(refused.fault(), Fault::Request);
    assert!(refused.to_string().contains("--replace"), "{refused}");
    assert_eq!(names(folder.path()), before);

    let replaced = RunFolder::open(folder.path(), another_identity(), true).unwrap();
    assert!(replaced.earlier().is_none());
    assert_eq!(names(folder.path()), [".lock"]);
}

#[test]
fn a_run_whose_manifest_is_damaged_counts_as_another() {
    let folder = temporary();
    finished_run(folder.path());
    fs::write(folder.path().join("manifest.json"), b"\x00\xff{").unwrap();
    let refused = RunFolder::open(folder.path(), identity(), false).unwrap_err();
    assert!(matches!(refused, RecordError::AnotherRun { .. }), "{refused}");
}

#[test]
fn foreign_files_are_never_touched() {
    let folder = temporary();
    fs::write(folder.path().join("thesis.tex"), "years of work").unwrap();
    for replace in [false, true] {
        let refused = RunFolder::open(folder.path(), identity(), replace).unwrap_err();
        assert!(matches!(refused, RecordError::ForeignFiles { .. }), "{refused}");
        assert!(refused.to_string().contains("thesis.tex"), "{refused}");
        assert_eq!(names(folder.path()), ["thesis.tex"]);
    }
}

#[test]
fn replacing_a_run_beside_foreign_files_is_refused() {
    let folder = temporary();
    finished_run(folder.path());
    fs::write(folder.path().join("notes.txt"), "mine").unwrap();
    let before = names(folder.path());
    let refused = RunFolder::open(folder.path(), another_identity(), true).unwrap_err();
    assert!(matches!(refused, RecordError::ForeignFiles { .. }), "{refused}");
    assert_eq!(names(folder.path()), before);
}

#[test]
fn two_runs_at_one_folder_at_once() {
    let folder = temporary();
    let first = RunFolder::open(folder.path(), identity(), false).unwrap();
    for (other, replace) in [(identity(), false), (identity(), true), (another_identity(), true)] {
        let refused = RunFolder::open(folder.path(), other, replace).unwrap_err();
        assert!(matches!(refused, RecordError::InUse { .. }), "{refused}");
        assert_eq!(refused.fault(), Fault::Request);
    }
    drop(first);
    RunFolder::open(folder.path(), identity(), false).unwrap();
}

#[test]
fn what_a_killed_run_left_is_cleared_and_does_not_bar_the_folder() {
    let folder = temporary();
    drop(RunFolder::open(folder.path(), identity(), false).unwrap());
    fs::write(folder.path().join(".unfinished-abc.tmp"), "half").unwrap();
    RunFolder::open(folder.path(), another_identity(), false).unwrap();
    assert_eq!(names(folder.path()), [".lock"]);
}

#[test]
fn paths_that_cannot_be_folders_are_the_requests_fault() {
    let folder = temporary();
    let file = folder.path().join("file");
    fs::write(&file, "").unwrap();
    let refused = RunFolder::open(&file, identity(), false).unwrap_err();
    assert!(matches!(refused, RecordError::NotAFolder { .. }), "{refused}");
    let refused = RunFolder::open(file.join("below"), identity(), false).unwrap_err();
    assert!(matches!(refused, RecordError::Create { .. }), "{refused}");
    assert_eq!(refused.fault(), Fault::Request);
}

/// Not even the superuser may write there.
#[cfg(target_os = "linux")]
#[test]
fn a_folder_without_permission_is_the_requests_fault() {
    let refused = RunFolder::open("/proc/sys/kernel", identity(), false).unwrap_err();
    assert_eq!(refused.fault(), Fault::Request);
    let refused = RunFolder::open("/proc/somadawn", identity(), false).unwrap_err();
    assert!(matches!(refused, RecordError::Create { .. }), "{refused}");
}
