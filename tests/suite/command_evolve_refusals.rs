//! What `evolve` refuses leaves everything as it was; a disk that fails leaves nothing half-written.

use std::fs;
use std::path::Path;
use std::process::{Command, Output};

use crate::command_fixture::{Desk, SMALL_POND};

/// Runs `evolve` with `--out out`; it must end with 2 and say every one of `sayings`.
fn refuses(desk: &Desk, out: &str, further: &[&str], sayings: &[&str]) {
    let ran = desk.evolve(&[&["--out", out], further].concat());
    assert_eq!((ran.code, ran.out.as_str()), (2, ""), "{out} {further:?}");
    for saying in sayings {
        assert!(ran.err.contains(saying), "`{saying}` is not in:\n{}", ran.err);
    }
}

#[test]
fn wrong_scenarios_as_check_refuses_them() {
    let desk = Desk::with("title = \"Pond\"\n[habitat]\nsites = 1\nsize = 3\n");
    for verb in ["check", "predict", "evolve"] {
        let ran = desk.run(&[verb, "pond.toml"]);
        assert_eq!((ran.code, ran.out.as_str()), (2, ""), "{verb}");
        for saying in ["has 2 faults", "`habitat.sites` = 1", "unknown key `habitat.size`"] {
            assert!(ran.err.contains(saying), "{verb}: {}", ran.err);
        }
        assert_eq!(desk.run(&[verb, "pool.toml"]).code, 2, "{verb}");
    }
    assert!(!desk.join("outputs").exists(), "a refused run makes no folder");
}

#[test]
fn wrong_command_lines() {
    let desk = Desk::with(SMALL_POND);
    for (further, saying) in [
        (&["--threads", "0"][..], "must be a whole number from 1 to 1024"),
        (&["--threads", "1025"], "must be a whole number from 1 to 1024"),
        (&["--seed", "18446744073709551615"], "`seed` = 18446744073709551615"),
        (&["--seed", "99999999999999999999"], "--seed"),
        (&["--seed", "-1"], "-1"),
        (&["--depth", "3"], "--depth"),
        (&["--set", "budget.upkeep_eu_per_h=1"], "must be below `budget.income_eu_per_h`"),
        (&["--set", "run.generations=4"], "`run.census_every` = 5 must be at most"),
        (&["--out"], "--out"),
        (&["--out", ""], "--out"),
        (&["another.toml"], "another.toml"),
    ] {
        let ran = desk.evolve(further);
        assert_eq!((ran.code, ran.out.as_str()), (2, ""), "{further:?}");
        assert!(ran.err.contains(saying), "`{saying}` is not in:\n{}", ran.err);
    }
    assert!(!desk.join("outputs").exists(), "a refused run makes no folder");
}

#[test]
fn a_folder_of_somebody_elses() {
    let desk = Desk::with(SMALL_POND);
    fs::create_dir(desk.join("notes")).expect("writable");
    fs::write(desk.join("notes/field.txt"), "three ponds").expect("writable");
    let before = desk.files("notes");
    for further in [&[][..], &["--replace"]] {
        refuses(&desk, "notes", further, &["holds files that are not a run's", "field.txt"]);
        assert_eq!(desk.files("notes"), before);
    }
    // A folder within counts as well.
    fs::create_dir_all(desk.join("shelf/notes")).expect("writable");
    refuses(&desk, "shelf", &["--replace"], &["holds files that are not a run's", "notes"]);
    assert!(desk.join("shelf/notes").is_dir());
}

#[test]
fn a_folder_of_another_run_unless_it_is_to_be_replaced() {
    let desk = Desk::with(SMALL_POND);
    desk.evolve_into("run", &[]);
    let before = desk.files("run");
    refuses(&desk, "run", &["--seed", "4"], &["another run", "--replace"]);
    assert_eq!(desk.files("run"), before);
    let replaced = desk.evolve_into("run", &["--seed", "4", "--replace"]);
    assert_eq!(desk.json("run/summary.json"), replaced);
    assert_eq!(desk.json("run/manifest.json")["seed"], 4);
    // Beside a run, files of somebody else's stay, and forbid that it be replaced.
    fs::write(desk.join("run/field.txt"), "three ponds").expect("writable");
    desk.evolve_into("run", &["--seed", "4"]);
    let before = desk.files("run");
    refuses(&desk, "run", &["--replace"], &["field.txt"]);
    assert_eq!(desk.files("run"), before);
}

/// Places where not even root can make a folder.
#[test]
fn places_where_no_folder_can_be() {
    let desk = Desk::with(SMALL_POND);
    refuses(&desk, "pond.toml", &[], &["pond.toml is not a folder", "--out"]);
    refuses(&desk, "pond.toml/run", &[], &["cannot make the output folder pond.toml/run", "--out"]);
    assert_eq!(fs::read_to_string(desk.join("pond.toml")).expect("readable"), SMALL_POND);
    if cfg!(target_os = "linux") {
        refuses(&desk, "/proc/1/run", &[], &["cannot make the output folder /proc/1/run"]);
        refuses(&desk, "/dev/null", &[], &["/dev/null is not a folder"]);
    }
}

/// Runs `evolve` where no file may grow beyond `blocks` of 512 or 1,024 bytes, as the shell counts.
/// The signal that would end the program is ignored, so it meets an error as from a full disk.
fn evolve_within(blocks: &str, desk: &Desk, further: &str) -> Output {
    let script = format!(
        "trap '' XFSZ; ulimit -f {blocks}; exec \"$0\" evolve pond.toml --out run {further}"
    );
    let mut shell = Command::new("sh");
    shell.args(["-c", &script, env!("CARGO_BIN_EXE_somadawn")]).current_dir(desk.path());
    shell.output().expect("a shell starts")
}

fn assert_failed_for_want_of_room(output: &Output) {
    let err = String::from_utf8_lossy(&output.stderr);
    assert_eq!(output.status.code(), Some(1), "{err}");
    assert!(output.stdout.is_empty());
    assert!(err.contains("error: cannot write ") && err.contains("run the same command"), "{err}");
}

#[cfg(unix)]
#[test]
fn a_disk_without_room_ends_the_run_with_nothing_half_written() {
    let desk = Desk::with(SMALL_POND);
    // Room for none, for some, and for all but the last few of the files.
    for blocks in ["1", "4", "12"] {
        assert_failed_for_want_of_room(&evolve_within(blocks, &desk, "--quiet"));
        assert_eq!(desk.names("run"), [".lock"], "with {blocks} blocks");
    }
    // With room, the same command does it all.
    desk.evolve_into("run", &[]);
    assert_eq!(desk.names("run").len(), 6);
}

/// A small disk of its own needs the right to mount, which not every machine gives; where it does
/// not, the test above stands alone.
#[cfg(target_os = "linux")]
#[test]
fn a_small_disk_that_is_full() {
    let desk = Desk::with(SMALL_POND);
    fs::create_dir(desk.join("disk")).expect("writable");
    let Some(_disk) = SmallDisk::mount(&desk.join("disk")) else { return };
    let ran = desk.evolve(&["--out", "disk/run", "--set", "run.replicates=60"]);
    assert_eq!((ran.code, ran.out.as_str()), (1, ""), "{}", ran.err);
    assert!(ran.err.contains("No space left on device"), "{}", ran.err);
    assert_eq!(desk.names("disk/run"), [".lock"]);
    // Not even the folder fits on a disk without room for anything.
    let room =
        fs::metadata(desk.join("disk")).map(|_| vec![0; 1 << 17]).expect("the disk is there");
    assert!(fs::write(desk.join("disk/filler"), room).is_err());
    let ran = desk.evolve(&["--out", "disk/another"]);
    assert!([1, 2].contains(&ran.code) && ran.out.is_empty(), "{ran:?}");
    assert!(ran.err.contains("No space left on device"), "{}", ran.err);
}

/// A disk of 64 KiB, unmounted when dropped.
struct SmallDisk(std::path::PathBuf);

impl SmallDisk {
    fn mount(place: &Path) -> Option<Self> {
        let mut command = Command::new("mount");
        command.args(["-t", "tmpfs", "-o", "size=64k", "tmpfs"]).arg(place);
        let mounted = command.output().is_ok_and(|output| output.status.success());
        mounted.then(|| Self(place.to_path_buf()))
    }
}

impl Drop for SmallDisk {
    fn drop(&mut self) {
        // A disk that stays mounted is seen by whoever cleans up the temporary folder.
        let _ = Command::new("umount").arg(&self.0).status();
    }
}
