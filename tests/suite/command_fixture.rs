//! The built program, run in a folder of its own.

use std::path::Path;

use assert_cmd::Command;
use tempfile::TempDir;

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
        command.args(arguments).current_dir(self.path()).env_remove("NO_COLOR");
        let output = command.output().expect("the program starts");
        let text = |bytes| String::from_utf8(bytes).expect("the program prints text");
        let ran = Ran {
            code: output.status.code().expect("the program ends by itself"),
            out: text(output.stdout),
            err: text(output.stderr),
        };
        assert!(!ran.err.contains("panicked"), "{}", ran.err);
        ran
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
