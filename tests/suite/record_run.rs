//! What a recorded run leaves: the same bytes in whatever order replicates finish, and all of it
//! or none.

use std::fs;
use std::path::Path;

use proptest::prelude::*;
use tempfile::TempDir;

use somadawn::record::replicates::read_replicates;
use somadawn::record::table::TableWriter;
use somadawn::record::{
    BodyRow, CensusRow, Fault, Manifest, RecordError, RunFolder, RunRecorder, Stage, Summary,
    read_table,
};

use crate::record_sample::{body, censored, census, ending, extinct, identity, onset, record};

fn temporary() -> TempDir {
    tempfile::tempdir().expect("a temporary folder")
}

fn start(path: &Path) -> RunRecorder {
    RunRecorder::start(RunFolder::open(path, identity(), false).unwrap()).unwrap()
}

/// Four replicates recorded in the order given; of `planned` asked for.
fn run_in_order(path: &Path, order: &[usize], planned: u32) -> (Summary, Manifest) {
    let rows = [onset(0, 100.0), censored(1), extinct(2, 40.0), onset(3, 300.5)];
    let mut run = start(path);
    for &place in order {
        run.add(record(rows[place].clone())).unwrap();
    }
    run.finish(&ending(planned)).unwrap()
}

fn bytes(folder: &Path, name: &str) -> Vec<u8> {
    fs::read(folder.join(name)).unwrap()
}

#[test]
fn the_order_in_which_replicates_finish_leaves_no_trace() {
    let (a, b) = (temporary(), temporary());
    let (_, first) = run_in_order(a.path(), &[0, 1, 2, 3], 4);
    let (_, second) = run_in_order(b.path(), &[3, 1, 0, 2], 4);
    for name in ["replicates.csv", "census.parquet", "bodies.parquet", "summary.json"] {
        assert!(bytes(a.path(), name) == bytes(b.path(), name), "{name} differs");
    }
    assert_eq!(first.files, second.files);
    assert_eq!(first.identity, second.identity);
}

#[test]
fn everything_reads_back() {
    let folder = temporary();
    let (summary, manifest) = run_in_order(folder.path(), &[2, 0, 3, 1], 4);
    assert_eq!(Summary::read(folder.path()).unwrap(), summary);
    assert_eq!(Manifest::read(folder.path()).unwrap(), manifest);
    let rows = read_replicates(&folder.path().join("replicates.csv")).unwrap();
    assert_eq!(rows, [onset(0, 100.0), censored(1), extinct(2, 40.0), onset(3, 300.5)]);
    let records: Vec<_> = rows.into_iter().map(record).collect();
    let censuses: Vec<CensusRow> = read_table(&folder.path().join("census.parquet")).unwrap();
    assert_eq!(censuses, records.iter().flat_map(|r| r.census.clone()).collect::<Vec<_>>());
    let bodies: Vec<BodyRow> = read_table(&folder.path().join("bodies.parquet")).unwrap();
    assert_eq!(bodies, records.iter().flat_map(|r| r.bodies.clone()).collect::<Vec<_>>());
}

#[test]
fn the_csv_is_as_promised() {
    let folder = temporary();
    run_in_order(folder.path(), &[0, 1, 2, 3], 4);
    let text = String::from_utf8(bytes(folder.path(), "replicates.csv")).unwrap();
    let lines: Vec<&str> = text.lines().collect();
    assert_eq!(
        lines[0],
        "replicate,seed,outcome,onset_generation,end_generation,division_index,soma_fraction,\
         class,route_noise,route_lineage,route_exposure,route_income,mean_fitness,\
         adult_cells,never_matured"
    );
    assert_eq!(
        lines[1],
        "0,18446744073709551615,onset,100.0,1500.0,0.9,0.5,complete,1.0,,,,1.25,60.5,3"
    );
    assert_eq!(
        lines[2],
        "1,18446744073709551614,censored,,1500.0,0.02,0.5,alike,1.0,,,,1.25,60.5,3"
    );
    assert_eq!(
        lines[3],
        "2,18446744073709551613,extinct,,40.0,0.02,0.5,partial,1.0,,,,1.25,60.5,3"
    );
}

#[test]
fn the_manifest_vouches_for_the_files() {
    let folder = temporary();
    let (_, manifest) = run_in_order(folder.path(), &[0, 1, 2, 3], 4);
    assert!(manifest.complete);
    assert_eq!(manifest.replicates_finished, [0, 1, 2, 3]);
    assert_eq!(manifest.files.len(), 4);
    assert!(manifest.started.ends_with('Z') && manifest.started <= manifest.ended);
    manifest.verify(folder.path()).unwrap();
    let csv = folder.path().join("replicates.csv");
    fs::write(&csv, "replicate\n").unwrap();
    let changed = manifest.verify(folder.path()).unwrap_err();
    assert!(matches!(&changed, RecordError::Changed { path } if *path == csv), "{changed}");
    fs::remove_file(&csv).unwrap();
    assert!(matches!(manifest.verify(folder.path()), Err(RecordError::Read { .. })));
}

#[test]
fn an_interrupted_run_leaves_what_had_finished() {
    let folder = temporary();
    let (summary, manifest) = run_in_order(folder.path(), &[3, 1], 4);
    assert!(!manifest.complete);
    assert_eq!(manifest.replicates_finished, [1, 3]);
    assert_eq!(summary.replicates, 2);
    let censuses: Vec<CensusRow> = read_table(&folder.path().join("census.parquet")).unwrap();
    assert_eq!((censuses[0].replicate, censuses[39].replicate), (1, 3));

    let nothing = temporary();
    let (summary, manifest) = run_in_order(nothing.path(), &[], 4);
    assert_eq!((summary.replicates, summary.onset.probability), (0, None));
    assert!(!manifest.complete);
    assert_eq!(read_replicates(&nothing.path().join("replicates.csv")).unwrap(), []);
    assert_eq!(read_table::<CensusRow>(&nothing.path().join("census.parquet")).unwrap(), []);
}

#[test]
fn a_run_that_is_given_up_leaves_an_earlier_one_as_it_was() {
    let folder = temporary();
    let (_, manifest) = run_in_order(folder.path(), &[0, 1], 4);
    let mut run = start(folder.path());
    run.add(record(onset(0, 7.0))).unwrap();
    drop(run);
    assert_eq!(Manifest::read(folder.path()).unwrap(), manifest);
    manifest.verify(folder.path()).unwrap();
    assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 6, "no temporary file stays");
}

#[test]
fn a_folder_that_vanishes_is_a_fault_of_running() {
    let folder = temporary();
    let path = folder.path().join("run");
    let run = start(&path);
    fs::remove_dir_all(&path).unwrap();
    let failed = run.finish(&ending(1)).unwrap_err();
    assert_eq!(failed.fault(), Fault::Running);
    assert!(failed.to_string().contains("replicates.csv"), "{failed}");
    assert!(!path.exists());
}

#[test]
fn a_replicate_counts_once() {
    let folder = temporary();
    let mut run = start(folder.path());
    run.add(record(onset(0, 1.0))).unwrap();
    run.add(record(onset(5, 1.0))).unwrap();
    for replicate in [0, 5] {
        let twice = run.add(record(censored(replicate))).unwrap_err();
        assert!(matches!(twice, RecordError::Twice { .. }), "{twice}");
    }
}

#[test]
fn files_that_are_no_tables_are_told_by_name() {
    let folder = temporary();
    let path = folder.path().join("x.parquet");
    assert!(matches!(read_table::<BodyRow>(&path), Err(RecordError::Read { .. })));
    for text in [&b""[..], b"PAR1", b"not a table at all, just words", b"PAR1\xff\xff\xff\x7fPAR1"]
    {
        fs::write(&path, text).unwrap();
        let refused = read_table::<BodyRow>(&path).unwrap_err();
        assert!(refused.to_string().contains("x.parquet"), "{refused}");
        assert_eq!(refused.fault(), Fault::Request);
    }
    run_in_order(folder.path().join("run").as_path(), &[0], 1);
    let other = read_table::<BodyRow>(&folder.path().join("run/census.parquet")).unwrap_err();
    assert!(matches!(other, RecordError::Column { column: "stage", .. }), "{other}");
}

/// Every other byte of a small table is damaged in turn (all bytes in four ways were, once): reading
/// must end in rows or an error, never in a panic.
#[test]
fn damaged_tables_are_errors_or_rows_but_never_a_panic() {
    let folder = temporary();
    let mut table = TableWriter::<BodyRow>::create(folder.path(), "b.parquet").unwrap();
    table.add(0, vec![body(0, 0, Stage::Start), body(0, 1, Stage::End)]).unwrap();
    table.finish().unwrap().finish().unwrap();
    let path = folder.path().join("b.parquet");
    let whole = fs::read(&path).unwrap();
    let mut refused = 0;
    let all = (0..whole.len()).step_by(2);
    let tried = all.len();
    for place in all {
        let mut damaged = whole.clone();
        damaged[place] ^= 0x80;
        fs::write(&path, damaged).unwrap();
        refused += usize::from(read_table::<BodyRow>(&path).is_err());
    }
    assert!(refused > tried / 2, "{refused} of {tried} damages were noticed");
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(32))]

    /// Any number survives, whatever its size, and unknown stays unknown.
    #[test]
    fn tables_keep_every_bit(
        values in prop::collection::vec((any::<u32>(), any::<f64>(), prop::option::of(any::<f64>())), 0..200),
        label in any::<i8>(),
    ) {
        let folder = temporary();
        let rows: Vec<CensusRow> = values
            .iter()
            .map(|&(count, number, index)| {
                let mut row = census(count, number, index);
                row.colonies = count;
                row.trait_variance[5] = number;
                row
            })
            .collect();
        let cells = [BodyRow { label, ..body(0, u32::MAX, Stage::Onset) }];
        let mut table = TableWriter::create(folder.path(), "c.parquet").unwrap();
        table.add(0, rows.clone()).unwrap();
        table.finish().unwrap().finish().unwrap();
        let read: Vec<CensusRow> = read_table(&folder.path().join("c.parquet")).unwrap();
        prop_assert_eq!(format!("{rows:?}"), format!("{read:?}"));
        let mut table = TableWriter::create(folder.path(), "b.parquet").unwrap();
        table.add(0, cells.to_vec()).unwrap();
        table.finish().unwrap().finish().unwrap();
        let read: Vec<BodyRow> = read_table(&folder.path().join("b.parquet")).unwrap();
        prop_assert_eq!(&read[..], &cells[..]);
    }
}
