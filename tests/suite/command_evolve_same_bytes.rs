//! The same scenario and seed leave the same bytes, for any number of threads and any number of
//! interruptions.

use std::fs;
use std::process::{Child, Command, Stdio};
use std::thread::sleep;
use std::time::{Duration, Instant};

use serde_json::Value;

use crate::command_fixture::{Desk, SMALL_POND};

const TABLES: [&str; 3] = ["replicates.csv", "census.parquet", "bodies.parquet"];

/// Six replicates that each take a tenth of a second or more, with a census every generation, so
/// that a signal finds some finished and others not.
const LONG_POND: &str = "title = \"Pond\"
habitat.sites = 64
body.adult_cells = 64
[run]
generations = 400
census_every = 1
replicates = 6
";

/// The document without what may differ between runs: times, machine and speed.
fn lasting(mut document: Value) -> Value {
    let fields = document.as_object_mut().expect("an object");
    for name in ["throughput", "started", "ended", "machine"] {
        fields.remove(name);
    }
    if let Some(Value::Array(files)) = fields.get_mut("files") {
        files.retain(|file| file["name"] != "summary.json");
    }
    document
}

fn assert_same_run(desk: &Desk, one: &str, other: &str) {
    for name in TABLES {
        let bytes = |run| fs::read(desk.join(run).join(name)).expect("the file can be read");
        assert!(bytes(one) == bytes(other), "{name} of {one} and {other} differ");
    }
    for name in ["summary.json", "manifest.json"] {
        let document = |run: &str| lasting(desk.json(&format!("{run}/{name}")));
        assert_eq!(document(one), document(other));
    }
}

#[test]
fn any_number_of_threads() {
    let text = SMALL_POND.replace("replicates = 3", "replicates = 9");
    let text = text + "[traits]\ncues = [\"noise\", \"lineage\", \"exposure\"]\n";
    let desk = Desk::with(text);
    for threads in ["1", "2", "7"] {
        desk.evolve_into(threads, &["--threads", threads]);
    }
    assert_same_run(&desk, "1", "2");
    assert_same_run(&desk, "1", "7");
}

/// A run in the background, killed when the test ends before it.
struct Running(Child);

impl Running {
    fn start(desk: &Desk) -> Self {
        let child = Command::new(env!("CARGO_BIN_EXE_somadawn"))
            .args(["evolve", "pond.toml", "--out", "run", "--threads", "1", "--json"])
            .current_dir(desk.path())
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn();
        Self(child.expect("the program starts"))
    }

    /// Sends a signal as soon as `ready`, and gives exit code, standard output and error.
    fn signal(mut self, name: &str, ready: impl Fn() -> bool) -> (Option<i32>, String, String) {
        let began = Instant::now();
        while !ready() {
            assert!(began.elapsed() < Duration::from_mins(2), "the run is never ready");
            let ended = self.0.try_wait().expect("the run can be waited for");
            assert!(ended.is_none(), "the run ended before it could be interrupted");
            sleep(Duration::from_millis(1));
        }
        let sent = Command::new("kill").args([name, &self.0.id().to_string()]).status();
        assert!(sent.expect("kill starts").success());
        let mut out = String::new();
        let mut err = String::new();
        let read = |pipe: Option<&mut dyn std::io::Read>, text: &mut String| {
            pipe.expect("the pipe is open").read_to_string(text).expect("the program prints text")
        };
        read(self.0.stdout.as_mut().map(|pipe| pipe as _), &mut out);
        read(self.0.stderr.as_mut().map(|pipe| pipe as _), &mut err);
        (self.0.wait().expect("the run can be waited for").code(), out, err)
    }
}

impl Drop for Running {
    fn drop(&mut self) {
        // Fails where the run has ended, which is as it should be.
        let _ = self.0.kill();
        let _ = self.0.wait();
    }
}

/// Bytes under temporary names in the run's folder.
fn bytes_pending(desk: &Desk) -> u64 {
    let Ok(entries) = fs::read_dir(desk.join("run")) else { return 0 };
    let temporary = entries
        .flatten()
        .filter(|entry| entry.file_name().to_string_lossy().starts_with(".unfinished-"));
    temporary.filter_map(|entry| entry.metadata().ok()).map(|data| data.len()).sum()
}

fn finished(manifest: &Value) -> usize {
    manifest["replicates_finished"].as_array().expect("a list").len()
}

#[test]
fn a_run_that_is_interrupted_goes_on_with_the_same_command() {
    for (signal, further) in [("-TERM", &["--replace"][..]), ("-INT", &[])] {
        let desk = Desk::with(LONG_POND);
        let whole = desk.evolve_into("whole", &["--threads", "2"]);
        // Censuses of the first replicate reach the disk when it is finished.
        let run = Running::start(&desk);
        let (code, out, err) = run.signal(signal, || bytes_pending(&desk) > 4096);
        assert_eq!(code, Some(75), "{err}");
        let manifest = desk.json("run/manifest.json");
        let done = finished(&manifest);
        assert!((1..6).contains(&done), "{done} of 6 are finished");
        assert_eq!(manifest["complete"], false);
        let saying = format!("stopped: {done} of 6 replicates are in run; the same command");
        assert!(err.contains(&saying), "{err}");
        let summary: Value = serde_json::from_str(&out).expect("one JSON document");
        assert_eq!(summary["replicates"], done);
        // Two interruptions leave no less than one.
        let (code, _, err) = Running::start(&desk).signal("-TERM", || bytes_pending(&desk) > 0);
        assert_eq!(code, Some(75), "{err}");
        assert!(finished(&desk.json("run/manifest.json")) >= done);
        let rest = desk.evolve_into("run", &[&["--threads", "1"], further].concat());
        assert_same_run(&desk, "whole", "run");
        // What had finished is not run again, not even where the command says `--replace`.
        let lives = |run: &Value| run["throughput"]["cell_lives"].as_u64().expect("a count");
        assert!(lives(&rest) < lives(&whole));
    }
}

#[test]
fn a_run_that_is_stopped_at_once_has_nothing_to_lose() {
    let desk = Desk::with(LONG_POND.replace("generations = 400", "generations = 4000"));
    let (code, out, err) =
        Running::start(&desk).signal("-TERM", || desk.join("run/.lock").exists());
    assert_eq!(code, Some(75), "{err}");
    assert!(err.contains("stopped: 0 of 6 replicates are in run"), "{err}");
    let summary: Value = serde_json::from_str(&out).expect("one JSON document");
    assert_eq!(summary["replicates"], 0);
    assert_eq!(summary["onset"]["probability"], Value::Null);
}

#[test]
fn a_run_that_is_killed_leaves_nothing_under_a_final_name() {
    let desk = Desk::with(LONG_POND);
    let (code, _, _) = Running::start(&desk).signal("-KILL", || bytes_pending(&desk) > 4096);
    assert_eq!(code, None);
    for name in desk.names("run") {
        assert!(name == ".lock" || name.starts_with(".unfinished-"), "{name}");
    }
    desk.evolve_into("run", &[]);
    assert_eq!(desk.names("run").len(), 6, "what the killed run left is gone");
    desk.evolve_into("whole", &[]);
    assert_same_run(&desk, "whole", "run");
}

#[test]
fn a_second_run_at_the_same_folder_is_refused() {
    let desk = Desk::with(LONG_POND);
    let first = Running::start(&desk);
    let (code, _, err) = first.signal("-TERM", || {
        let locked = desk.join("run/.lock").exists() && bytes_pending(&desk) > 0;
        if locked {
            for further in [&[][..], &["--replace"], &["--seed", "9", "--replace"]] {
                let second = desk.evolve(&[&["--out", "run"], further].concat());
                assert_eq!((second.code, second.out.as_str()), (2, ""));
                assert!(second.err.contains("another run is writing to run"), "{}", second.err);
            }
        }
        locked
    });
    assert_eq!(code, Some(75), "{err}");
}
