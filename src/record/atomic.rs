//! Files that appear whole or not at all.

use std::fs::File;
use std::io::Write;
use std::path::{Path, PathBuf};

use serde::Serialize;
use tempfile::{Builder, NamedTempFile};

use super::file_name::TEMPORARY;
use super::{FileEntry, RecordError};

/// A file under a temporary name, which is removed unless the file is finished.
#[derive(Debug)]
pub struct PendingFile {
    file: NamedTempFile,
    path: PathBuf,
}

impl PendingFile {
    /// A new file that will be called `name` in `folder`.
    ///
    /// # Errors
    /// [`RecordError::Write`] if no file can be made there.
    pub fn create(folder: &Path, name: &str) -> Result<Self, RecordError> {
        let path = folder.join(name);
        let mut builder = Builder::new();
        builder.prefix(TEMPORARY.0).suffix(TEMPORARY.1);
        readable_by_all(&mut builder);
        let file = builder.tempfile_in(folder).map_err(RecordError::writing(&path))?;
        Ok(Self { file, path })
    }

    /// Where the file will be.
    #[must_use]
    pub fn path(&self) -> &Path {
        &self.path
    }

    /// Size and checksum of what has been written, to be listed as `name`.
    ///
    /// # Errors
    /// [`RecordError::Read`] if it cannot be read back.
    pub fn entry(&self, name: &str) -> Result<FileEntry, RecordError> {
        FileEntry::of(self.file.path(), name)
    }

    /// Flushes the file to the disk and gives it its name, over any former file of that name.
    ///
    /// # Errors
    /// [`RecordError::Write`] if the disk refuses; the former file then stays as it was.
    pub fn finish(self) -> Result<(), RecordError> {
        let Self { file, path } = self;
        file.as_file().sync_all().map_err(RecordError::writing(&path))?;
        file.persist(&path).map_err(|e| RecordError::writing(&path)(e.error))?;
        sync_folder_of(&path)
    }
}

impl Write for PendingFile {
    fn write(&mut self, bytes: &[u8]) -> std::io::Result<usize> {
        self.file.as_file_mut().write(bytes)
    }

    fn flush(&mut self) -> std::io::Result<()> {
        self.file.as_file_mut().flush()
    }
}

/// A file `name` in `folder` with these bytes, not yet under its name.
///
/// # Errors
/// [`RecordError::Write`] if the disk refuses.
pub fn pending_bytes(folder: &Path, name: &str, bytes: &[u8]) -> Result<PendingFile, RecordError> {
    let mut file = PendingFile::create(folder, name)?;
    let written = file.write_all(bytes);
    written.map_err(RecordError::writing(&file.path))?;
    Ok(file)
}

/// A file `name` in `folder` with `value` as indented JSON, not yet under its name.
///
/// Numbers that are NaN or infinite become `null`, as JSON has no others.
///
/// # Errors
/// [`RecordError::Write`] if the disk refuses.
pub fn pending_json(
    folder: &Path,
    name: &str,
    value: &impl Serialize,
) -> Result<PendingFile, RecordError> {
    let mut bytes = serde_json::to_vec_pretty(value)
        .map_err(|e| RecordError::writing(&folder.join(name))(e.into()))?;
    bytes.push(b'\n');
    pending_bytes(folder, name, &bytes)
}

/// Temporary files are private by default; results are to be read by colleagues, as the user's
/// file-creation mask allows.
#[cfg(unix)]
fn readable_by_all(builder: &mut Builder<'_, '_>) {
    use std::os::unix::fs::PermissionsExt;
    builder.permissions(std::fs::Permissions::from_mode(0o666));
}

#[cfg(not(unix))]
fn readable_by_all(_: &mut Builder<'_, '_>) {}

/// A rename is safe against a power cut only once the folder itself is on the disk.
fn sync_folder_of(path: &Path) -> Result<(), RecordError> {
    match path.parent() {
        Some(folder) if cfg!(unix) => File::open(folder)
            .and_then(|folder| folder.sync_all())
            .map_err(RecordError::writing(path)),
        _ => Ok(()),
    }
}
