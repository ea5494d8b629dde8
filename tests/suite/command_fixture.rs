//! The built program, run in a folder of its own.

use std::path::{Path, PathBuf};
use std::time::Duration;

use assert_cmd::Command;
use serde_json::Value;
use tempfile::TempDir;

/// Longest that a run of the program may take: each takes well under a second, so whatever is cut
/// off here hangs.
const PATIENCE: Duration = Duration::from_mins(2);

/// A population that evolves in some hundredths of a second.
pub(crate) const SMALL_POND: &str = "title = \"Pond\"
seed = 3
habitat.sites = 16
body.adult_cells = 16
[run]
generations = 40
census_every = 5
replicates = 3
";

/// A temporary folder to run the program in.
pub(crate) struct Desk {
    folder: TempDir,
}

/// What a run of the program left.
#[derive(Debug)]
pub(crate) struct Ran {
    pub(crate) code: i32,
    pub(crate) out: String,
    pub(crate) err: String,
}

impl Desk {
    pub(crate) fn new() -> Self {
        Self { folder: TempDir::new().expect("a temporary folder can be made") }
    }

    /// A folder that holds `text` as `pond.toml`.
    pub(crate) fn with(text: impl AsRef<[u8]>) -> Self {
        let desk = Self::new();
        std::fs::write(desk.path().join("pond.toml"), text).expect("the folder is writable");
        desk
    }

    pub(crate) fn path(&self) -> &Path {
        self.folder.path()
    }

    /// Runs the program; it must neither panic nor be killed.
    pub(crate) fn run(&self, arguments: &[&str]) -> Ran {
        let mut command = Command::new(env!("CARGO_BIN_EXE_somadawn"));
        command.args(arguments).current_dir(self.path()).env_remove("NO_COLOR").timeout(PATIENCE);
        let output = command.output().expect("the program starts");
        let text = |bytes| String::from_utf8(bytes).expect("the program prints text");
        let ran = Ran {
            code: output.status.code().unwrap_or_else(|| panic!("{arguments:?}: {output:?}")),
            out: text(output.stdout),
            err: text(output.stderr),
        };
        assert!(!ran.err.contains("panicked"), "{}", ran.err);
        ran
    }

    /// Runs `evolve pond.toml --quiet` with further arguments.
    pub(crate) fn evolve(&self, further: &[&str]) -> Ran {
        self.run(&[&["evolve", "pond.toml", "--quiet"], further].concat())
    }

    /// Runs `evolve pond.toml --quiet --json` into the folder `out` with further arguments; it
    /// must end well and print nothing but one JSON document.
    pub(crate) fn evolve_into(&self, out: &str, further: &[&str]) -> Value {
        let ran = self.evolve(&[&["--json", "--out", out], further].concat());
        assert_eq!((ran.code, ran.err.as_str()), (0, ""), "{further:?}");
        serde_json::from_str(&ran.out).expect("one JSON document")
    }

    /// The path of something in the folder.
    pub(crate) fn join(&self, name: &str) -> PathBuf {
        self.path().join(name)
    }

    /// Names and bytes of all files of the folder `name`, sorted.
    pub(crate) fn files(&self, name: &str) -> Vec<(String, Vec<u8>)> {
        let entries = std::fs::read_dir(self.join(name)).expect("the folder can be read");
        let paths = entries.map(|entry| entry.expect("the entry can be read").path());
        let mut files: Vec<_> = paths
            .filter(|path| path.is_file())
            .map(|path| {
                let name = path.file_name().expect("a file has a name").to_string_lossy();
                (name.into_owned(), std::fs::read(&path).expect("the file can be read"))
            })
            .collect();
        files.sort();
        files
    }

    /// Names of the files of the folder `name`, sorted.
    pub(crate) fn names(&self, name: &str) -> Vec<String> {
        self.files(name).into_iter().map(|(name, _)| name).collect()
    }

    /// A JSON file.
    pub(crate) fn json(&self, name: &str) -> Value {
        let text = std::fs::read(self.join(name)).expect("the file can be read");
        serde_json::from_slice(&text).expect("one JSON document")
    }

    /// Runs `check pond.toml` with further arguments; it must refuse with exit code 2, print
    /// nothing on standard output, and say every one of `sayings`.
    pub(crate) fn refuses(&self, further: &[&str], sayings: &[&str]) -> String {
        let ran = self.run(&[&["check", "pond.toml"], further].concat());
        assert_eq!(ran.code, 2, "{ran:?}");
        assert_eq!(ran.out, "");
        for saying in sayings {
            assert!(ran.err.contains(saying), "`{saying}` is not in:\n{}", ran.err);
        }
        ran.err
    }
}

/// Refuses a scenario with a title and `text`, whose first line is the file's second.
pub(crate) fn refuses(text: &str, sayings: &[&str]) -> String {
    Desk::with(format!("title = \"Pond\"\n{text}\n")).refuses(&[], sayings)
}

/// The keys of a JSON object, sorted.
pub(crate) fn keys(value: &Value) -> Vec<&str> {
    value.as_object().expect("an object").keys().map(String::as_str).collect()
}
