//! The output folder: results appear whole or not at all, and nothing of others is touched.

use serde::{Deserialize, Serialize};
use sha2::{Digest, Sha256};
use std::fmt;
use std::fmt::Write as _;
use std::fs;
use std::io;
use std::path::{Component, Path, PathBuf};
use tempfile::TempDir;

/// The file that lists the others, and is written last.
pub const SUMMARY: &str = "summary.json";

/// One file of a result, as its summary lists it.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct ListedFile {
    /// Name in the folder.
    pub name: String,
    /// SHA-256 of its bytes, in hexadecimal digits.
    pub sha256: String,
}

/// Why results cannot be written.
#[derive(Debug)]
pub enum OutputError {
    /// The folder holds an earlier result, or other files, and replacing was not asked for.
    Occupied {
        /// The folder.
        folder: PathBuf,
        /// Whether what it holds is a result of ours.
        earlier_result: bool,
    },
    /// A file that would be replaced is not one that an earlier result lists, or was changed since.
    NotOurs {
        /// The file.
        file: PathBuf,
        /// Whether it is listed but was changed.
        changed: bool,
    },
    /// The path exists and is not a folder.
    NotAFolder {
        /// The path.
        folder: PathBuf,
    },
    /// The system refused.
    Io {
        /// What was being done.
        doing: &'static str,
        /// With which path.
        path: PathBuf,
        /// What the system said.
        error: io::Error,
    },
}

impl fmt::Display for OutputError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Occupied { folder, earlier_result: true } => write!(
                f,
                "output folder `{}` holds an earlier result; give another folder, or `--force` to replace it",
                folder.display()
            ),
            Self::Occupied { folder, earlier_result: false } => write!(
                f,
                "output folder `{}` holds files that are not a result of this program; give another folder",
                folder.display()
            ),
            Self::NotOurs { file, changed: true } => write!(
                f,
                "`{}` was changed since this program wrote it and is not replaced; move it away, or give another folder",
                file.display()
            ),
            Self::NotOurs { file, changed: false } => write!(
                f,
                "`{}` was not written by this program and is not replaced; move it away, or give another folder",
                file.display()
            ),
            Self::NotAFolder { folder } => {
                write!(f, "output folder `{}` exists and is not a folder; give another one", folder.display())
            }
            Self::Io { doing, path, error } => write!(
                f,
                "{doing} `{}`: {error}; free the place, or give another folder with `--output`",
                path.display()
            ),
        }
    }
}

impl std::error::Error for OutputError {}

/// The part of a summary by which a result is recognized.
#[derive(Deserialize)]
struct Listing {
    program: String,
    files: Vec<ListedFile>,
}

/// Files of a result while they are written, hidden beside the output folder until all are complete.
#[derive(Debug)]
pub struct Staging {
    folder: PathBuf,
    staged: TempDir,
    files: Vec<ListedFile>,
    earlier: Vec<ListedFile>,
}

impl Staging {
    /// Looks whether `folder` may be written to; with `force` it may hold an earlier result. Looked at before any work is done.
    ///
    /// # Errors
    /// A folder that is occupied, a path that is no folder, or a parent folder that cannot be written to.
    pub fn open(folder: &Path, force: bool) -> Result<Self, OutputError> {
        let earlier = earlier_files(folder, force)?;
        // A new folder grows beside its place and is moved there whole; in one that exists files are put one by one.
        let place = if folder.is_dir() { folder } else { parent_of(folder) };
        fs::create_dir_all(place).map_err(io_error("cannot create", place))?;
        let staged = tempfile::Builder::new()
            .prefix(".spandrel-partial-")
            .tempdir_in(place)
            .map_err(io_error("cannot write into", place))?;
        Ok(Self { folder: folder.to_path_buf(), staged, files: Vec::new(), earlier })
    }

    /// Writes one file of the result.
    ///
    /// # Errors
    /// What the system refuses, a full disk for example.
    pub fn write(&mut self, name: &str, bytes: &[u8]) -> Result<(), OutputError> {
        self.write_through(name, bytes)?;
        self.files.push(ListedFile { name: name.to_owned(), sha256: hex_digest(bytes) });
        Ok(())
    }

    /// The files written so far, for the summary.
    #[must_use]
    pub fn files(&self) -> &[ListedFile] {
        &self.files
    }

    /// Writes the summary, which lists the others, and puts everything in its place.
    ///
    /// # Errors
    /// A file in the way that is not ours, or what the system refuses.
    pub fn finish(self, summary: &[u8]) -> Result<(), OutputError> {
        self.write_through(SUMMARY, summary)?;
        if !self.folder.is_dir() {
            return self.put_whole_folder();
        }
        let names: Vec<&str> = self.files.iter().map(|file| file.name.as_str()).chain([SUMMARY]).collect();
        self.check_in_the_way(&names)?;
        for name in &names {
            let target = self.folder.join(name);
            fs::rename(self.staged.path().join(name), &target).map_err(io_error("cannot write", &target))?;
        }
        for file in self.earlier.iter().filter(|file| !names.contains(&file.name.as_str())) {
            let old = self.folder.join(&file.name);
            fs::remove_file(&old).map_err(io_error("cannot remove", &old))?;
        }
        Ok(())
    }

    fn write_through(&self, name: &str, bytes: &[u8]) -> Result<(), OutputError> {
        let path = self.staged.path().join(name);
        let write = || {
            let mut file = fs::File::create(&path)?;
            io::Write::write_all(&mut file, bytes)?;
            file.sync_all()
        };
        write().map_err(io_error("cannot write", &self.folder.join(name)))
    }

    fn put_whole_folder(self) -> Result<(), OutputError> {
        let folder = self.folder;
        let staged = self.staged.keep();
        open_to_readers(&staged);
        fs::rename(&staged, &folder).map_err(|error| {
            let _ = fs::remove_dir_all(&staged);
            io_error("cannot write", &folder)(error)
        })
    }

    fn check_in_the_way(&self, names: &[&str]) -> Result<(), OutputError> {
        for name in names.iter().filter(|name| **name != SUMMARY) {
            let file = self.folder.join(name);
            let Ok(bytes) = fs::read(&file) else { continue };
            match self.earlier.iter().find(|listed| listed.name == **name) {
                None => return Err(OutputError::NotOurs { file, changed: false }),
                Some(listed) if listed.sha256 != hex_digest(&bytes) => {
                    return Err(OutputError::NotOurs { file, changed: true });
                }
                Some(_) => {}
            }
        }
        Ok(())
    }
}

fn parent_of(folder: &Path) -> &Path {
    match folder.parent() {
        Some(parent) if !parent.as_os_str().is_empty() => parent,
        _ => Path::new("."),
    }
}

/// What an earlier result in the folder lists; empty for a new or an empty folder.
fn earlier_files(folder: &Path, force: bool) -> Result<Vec<ListedFile>, OutputError> {
    if !folder.exists() {
        return Ok(Vec::new());
    }
    if !folder.is_dir() {
        return Err(OutputError::NotAFolder { folder: folder.to_path_buf() });
    }
    let mut entries = fs::read_dir(folder).map_err(io_error("cannot read", folder))?;
    if entries.next().is_none() {
        return Ok(Vec::new());
    }
    let listing =
        fs::read(folder.join(SUMMARY)).ok().and_then(|bytes| serde_json::from_slice::<Listing>(&bytes).ok()).filter(
            |listing| listing.program == crate::PROGRAM && listing.files.iter().all(|file| is_plain_name(&file.name)),
        );
    match listing {
        Some(listing) if force => Ok(listing.files),
        listing => Err(OutputError::Occupied { folder: folder.to_path_buf(), earlier_result: listing.is_some() }),
    }
}

/// A result lists files of its own folder only; a path that leads elsewhere was not written by this program.
fn is_plain_name(name: &str) -> bool {
    let mut parts = Path::new(name).components();
    matches!((parts.next(), parts.next()), (Some(Component::Normal(part)), None) if part == name)
}

/// Temporary folders are private to their owner; a finished result is as open as any new folder.
#[cfg(unix)]
fn open_to_readers(folder: &Path) {
    use std::os::unix::fs::PermissionsExt;
    let _ = fs::set_permissions(folder, fs::Permissions::from_mode(0o755));
}

#[cfg(not(unix))]
fn open_to_readers(_folder: &Path) {}

fn io_error(doing: &'static str, path: &Path) -> impl FnOnce(io::Error) -> OutputError {
    let path = path.to_path_buf();
    move |error| OutputError::Io { doing, path, error }
}

fn hex_digest(bytes: &[u8]) -> String {
    Sha256::digest(bytes).iter().fold(String::new(), |mut digits, byte| {
        let _ = write!(digits, "{byte:02x}");
        digits
    })
}
