//! The manifest: what a run was, on which machine, and the checksums of what it left.

use std::fs::File;
use std::io::{self, Read};
use std::path::Path;

use serde::{Deserialize, Serialize};
use sha2::{Digest, Sha256};

use super::{RecordError, file_name};

/// What a run was and what it left. Only this file holds times and the machine.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Manifest {
    /// Program name and version.
    pub program: String,
    /// SHA-256 of program, seed and scenario: equal in two runs that must leave the same results.
    pub identity: String,
    /// The scenario's seed.
    pub seed: u64,
    /// Whether all replicates finished.
    pub complete: bool,
    /// Replicates asked for.
    pub replicates: u32,
    /// Replicates that finished, from 0, in order.
    pub replicates_finished: Vec<u32>,
    /// When the run began, RFC 3339, UTC.
    pub started: String,
    /// When it ended, RFC 3339, UTC.
    pub ended: String,
    /// Where it ran.
    pub machine: Machine,
    /// The other files of the folder.
    pub files: Vec<FileEntry>,
    /// The scenario as resolved, every default spelled out, as TOML.
    pub scenario: String,
}

/// Where a run ran.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Machine {
    /// Operating system.
    pub os: String,
    /// Instruction set.
    pub arch: String,
    /// Logical cores that the process may use; null where the system does not say.
    pub logical_cores: Option<usize>,
}

impl Machine {
    /// This machine.
    #[must_use]
    pub fn this() -> Self {
        Self {
            os: std::env::consts::OS.to_owned(),
            arch: std::env::consts::ARCH.to_owned(),
            logical_cores: std::thread::available_parallelism().ok().map(usize::from),
        }
    }
}

/// Size and checksum of a file.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct FileEntry {
    /// Name within the folder.
    pub name: String,
    /// Size.
    pub bytes: u64,
    /// SHA-256, 64 hexadecimal digits.
    pub sha256: String,
}

impl FileEntry {
    /// The entry of the file at `path`, to be listed as `name`.
    ///
    /// # Errors
    /// [`RecordError::Read`] if it cannot be read.
    pub fn of(path: &Path, name: &str) -> Result<Self, RecordError> {
        let (bytes, sha256) = size_and_digest(path).map_err(RecordError::reading(path))?;
        Ok(Self { name: name.to_owned(), bytes, sha256 })
    }
}

impl Manifest {
    /// The manifest in `folder`.
    ///
    /// # Errors
    /// [`RecordError::Read`] if there is none, [`RecordError::ReadJson`] if it is damaged.
    pub fn read(folder: &Path) -> Result<Self, RecordError> {
        read_json(&folder.join(file_name::MANIFEST))
    }

    /// Checks that the files in `folder` are those that the run left.
    ///
    /// # Errors
    /// [`RecordError::Read`] or [`RecordError::Changed`] names the first file that is missing or
    /// has other bytes.
    pub fn verify(&self, folder: &Path) -> Result<(), RecordError> {
        for expected in &self.files {
            let path = folder.join(&expected.name);
            if FileEntry::of(&path, &expected.name)? != *expected {
                return Err(RecordError::Changed { path });
            }
        }
        Ok(())
    }
}

/// The JSON document at `path`.
pub(super) fn read_json<T: serde::de::DeserializeOwned>(path: &Path) -> Result<T, RecordError> {
    let text = std::fs::read(path).map_err(RecordError::reading(path))?;
    serde_json::from_slice(&text)
        .map_err(|source| RecordError::ReadJson { path: path.to_path_buf(), source })
}

/// SHA-256 of `bytes` in 64 hexadecimal digits.
pub(super) fn hex_sha256(bytes: &[u8]) -> String {
    hex(&Sha256::digest(bytes))
}

fn hex(digest: &[u8]) -> String {
    const DIGITS: [char; 16] =
        ['0', '1', '2', '3', '4', '5', '6', '7', '8', '9', 'a', 'b', 'c', 'd', 'e', 'f'];
    digest
        .iter()
        .flat_map(|byte| [byte >> 4, byte & 15])
        .map(|nibble| DIGITS[usize::from(nibble)])
        .collect()
}

fn size_and_digest(path: &Path) -> io::Result<(u64, String)> {
    let mut file = File::open(path)?;
    let mut hasher = Sha256::new();
    let mut buffer = vec![0; 1 << 16];
    let mut bytes = 0;
    loop {
        let read = file.read(&mut buffer)?;
        if read == 0 {
            return Ok((bytes, hex(&hasher.finalize())));
        }
        hasher.update(&buffer[..read]);
        bytes += read as u64;
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// FIPS 180-4, appendix: the digest of "abc".
    #[test]
    fn digest_of_the_standards_example() {
        assert_eq!(
            hex_sha256(b"abc"),
            "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
        );
    }
}
