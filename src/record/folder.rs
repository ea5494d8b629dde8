//! The run folder: whose it is, who may write to it, and what may be deleted in it.

use std::fs::{self, File, OpenOptions, TryLockError};
use std::io::{self, Read, Seek, Write};
use std::path::{Path, PathBuf};

use super::manifest::{Manifest, hex_sha256};
use super::{PROGRAM, RecordError, file_name};

/// What makes two runs the same run: program version, resolved scenario and seed.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct RunIdentity {
    scenario: String,
    seed: u64,
    digest: String,
}

impl RunIdentity {
    /// The identity of running `scenario` (resolved, as TOML) with `seed` by this program.
    #[must_use]
    pub fn new(scenario: impl Into<String>, seed: u64) -> Self {
        Self::by_program(PROGRAM, scenario.into(), seed)
    }

    /// SHA-256 of program, seed and scenario. The first two end at a line break that neither can
    /// hold, so no two identities share their bytes.
    fn by_program(program: &str, scenario: String, seed: u64) -> Self {
        let digest = hex_sha256(format!("{program}\n{seed}\n{scenario}").as_bytes());
        Self { scenario, seed, digest }
    }

    /// The resolved scenario, as TOML.
    #[must_use]
    pub fn scenario(&self) -> &str {
        &self.scenario
    }

    /// The scenario's seed.
    #[must_use]
    pub const fn seed(&self) -> u64 {
        self.seed
    }

    /// The identity in 64 hexadecimal digits.
    #[must_use]
    pub fn digest(&self) -> &str {
        &self.digest
    }
}

/// A folder that this process alone may write a run to, until it is dropped.
#[derive(Debug)]
pub struct RunFolder {
    path: PathBuf,
    identity: RunIdentity,
    earlier: Option<Manifest>,
    /// The system lets go of the lock when the file is closed, whatever ends the process.
    _lock: File,
}

impl RunFolder {
    /// Opens `path` for the run `identity`, making the folder if need be.
    ///
    /// A folder that is empty, or that holds the same run (finished or not), is taken as it is. One
    /// that holds another run is refused unless `replace`, which deletes that run's files. Files
    /// that no run wrote are never touched: beside the same run they may lie, else the folder is
    /// refused. With `replace` the same run counts as new if it is finished, and goes on if not.
    ///
    /// # Errors
    /// All are the request's fault: [`RecordError::Create`], [`RecordError::NotAFolder`],
    /// [`RecordError::Access`], [`RecordError::AnotherRun`], [`RecordError::ForeignFiles`], and
    /// [`RecordError::InUse`] if another process has the folder open.
    pub fn open(
        path: impl Into<PathBuf>,
        identity: RunIdentity,
        replace: bool,
    ) -> Result<Self, RecordError> {
        let path = path.into();
        make_folder(&path)?;
        // Before anything is written: a folder of somebody else's gets no lock file.
        Contents::list(&path)?.refuse_if_only_foreign(&path)?;
        let mut lock = lock(&path)?;
        let contents = Contents::list(&path)?;
        let found = Found::read(&path, &mut lock);
        let same = found.digest.as_deref() == Some(identity.digest());
        if !same {
            contents.make_way(&path, replace)?;
        }
        contents.remove_temporary(&path)?;
        mark(&mut lock, &identity).map_err(access(&path))?;
        // Whoever asks to replace a finished run wants it anew; an unfinished one goes on, so that
        // the command that was interrupted, `--replace` and all, can be given again.
        let earlier = found.manifest.filter(|run| same && !(replace && run.complete));
        Ok(Self { path, identity, earlier, _lock: lock })
    }

    /// Where the folder is.
    #[must_use]
    pub fn path(&self) -> &Path {
        &self.path
    }

    /// The run that the folder is for.
    #[must_use]
    pub const fn identity(&self) -> &RunIdentity {
        &self.identity
    }

    /// The manifest of the same run if it was here before and is not to be repeated, so that what
    /// has finished need not be.
    #[must_use]
    pub const fn earlier(&self) -> Option<&Manifest> {
        self.earlier.as_ref()
    }
}

fn make_folder(path: &Path) -> Result<(), RecordError> {
    if path.exists() && !path.is_dir() {
        return Err(RecordError::NotAFolder { path: path.to_path_buf() });
    }
    fs::create_dir_all(path)
        .map_err(|source| RecordError::Create { path: path.to_path_buf(), source })
}

fn access(path: &Path) -> impl FnOnce(io::Error) -> RecordError {
    move |source| RecordError::Access { path: path.to_path_buf(), source }
}

/// Locks the folder for this process.
fn lock(path: &Path) -> Result<File, RecordError> {
    let file = OpenOptions::new()
        .read(true)
        .write(true)
        .create(true)
        .truncate(false)
        .open(path.join(file_name::LOCK))
        .map_err(access(path))?;
    match file.try_lock() {
        Ok(()) => Ok(file),
        Err(TryLockError::WouldBlock) => Err(RecordError::InUse { path: path.to_path_buf() }),
        // Some cluster file systems know no locks; a run there must not fail for that.
        Err(TryLockError::Error(e)) if e.kind() == io::ErrorKind::Unsupported => Ok(file),
        Err(TryLockError::Error(e)) => Err(access(path)(e)),
    }
}

/// Writes into the lock file whose run it is, so that an unfinished run knows its folder again.
fn mark(lock: &mut File, identity: &RunIdentity) -> io::Result<()> {
    lock.set_len(0)?;
    lock.rewind()?;
    writeln!(lock, "{}", identity.digest())?;
    lock.sync_all()
}

/// The run that a folder holds, as far as its files tell.
struct Found {
    digest: Option<String>,
    manifest: Option<Manifest>,
}

impl Found {
    /// From the manifest, or else from the mark of an unfinished run. A damaged manifest tells
    /// nothing, so its folder counts as another run's.
    fn read(path: &Path, lock: &mut File) -> Self {
        if path.join(file_name::MANIFEST).exists() {
            let manifest = Manifest::read(path).ok();
            return Self { digest: manifest.as_ref().map(|m| m.identity.clone()), manifest };
        }
        let mut mark = String::new();
        let digest = lock.read_to_string(&mut mark).ok().map(|_| mark.trim().to_owned());
        Self { digest, manifest: None }
    }
}

/// Names of what lies in a folder, sorted.
struct Contents {
    /// Results and manifest of a run.
    results: Vec<String>,
    /// What a run that was killed left behind.
    temporary: Vec<String>,
    /// What no run wrote.
    foreign: Vec<String>,
}

impl Contents {
    fn list(path: &Path) -> Result<Self, RecordError> {
        let names: io::Result<Vec<String>> = fs::read_dir(path)
            .map_err(access(path))?
            .map(|entry| Ok(entry?.file_name().to_string_lossy().into_owned()))
            .collect();
        let mut names = names.map_err(access(path))?;
        names.sort();
        let (owned, foreign): (Vec<_>, Vec<_>) =
            names.into_iter().partition(|name| file_name::is_owned(name));
        let (temporary, results) = owned
            .into_iter()
            .filter(|name| name != file_name::LOCK)
            .partition(|name| file_name::is_temporary(name));
        Ok(Self { results, temporary, foreign })
    }

    fn refuse_if_only_foreign(&self, path: &Path) -> Result<(), RecordError> {
        if self.results.is_empty() && self.temporary.is_empty() && !self.foreign.is_empty() {
            // An unfinished run's folder is known by its mark.
            if !path.join(file_name::LOCK).exists() {
                return Err(self.foreign_files(path));
            }
        }
        Ok(())
    }

    /// Refuses a folder that is not the run's own, or empties it.
    fn make_way(&self, path: &Path, replace: bool) -> Result<(), RecordError> {
        if !self.foreign.is_empty() && (replace || self.results.is_empty()) {
            return Err(self.foreign_files(path));
        }
        if !self.results.is_empty() && !replace {
            return Err(RecordError::AnotherRun { path: path.to_path_buf() });
        }
        remove(path, &self.results)
    }

    fn remove_temporary(&self, path: &Path) -> Result<(), RecordError> {
        remove(path, &self.temporary)
    }

    fn foreign_files(&self, path: &Path) -> RecordError {
        RecordError::ForeignFiles { path: path.to_path_buf(), files: self.foreign.clone() }
    }
}

fn remove(path: &Path, names: &[String]) -> Result<(), RecordError> {
    names.iter().try_for_each(|name| fs::remove_file(path.join(name))).map_err(access(path))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn identity_depends_on_program_scenario_and_seed() {
        let of = |program: &str, scenario: &str, seed| {
            RunIdentity::by_program(program, scenario.to_owned(), seed).digest
        };
        let digest = of("p 1", "title = \"a\"", 1);
        assert_eq!(digest.len(), 64);
        assert_eq!(digest, of("p 1", "title = \"a\"", 1));
        assert_ne!(digest, of("p 2", "title = \"a\"", 1));
        assert_ne!(digest, of("p 1", "title = \"b\"", 1));
        assert_ne!(digest, of("p 1", "title = \"a\"", 2));
    }
}
