//! The result folder: refused when it holds something, marked while it is being written, complete once `summary.json`
//! is there.
//!
//! Every file is written to a temporary name beside its own and renamed. An earlier result is removed only when
//! everything that replaces it has been computed, and only the files that this program writes are removed.

use std::fs;
use std::io::{self, Read, Write};
use std::path::{Path, PathBuf};

/// Name of the file that marks a folder whose result is not complete.
pub const MARKER: &str = "unfinished.txt";
/// Name of the file that is written last.
pub const SUMMARY: &str = "summary.json";

/// First bytes of a PNG file (ISO/IEC 15948, section 5.2).
const PNG_BEGIN: [u8; 8] = *b"\x89PNG\r\n\x1a\n";

const MARKER_TEXT: &str = "A run has not finished writing this folder, or was killed before it could.\n";

/// Files at the top of a result folder, beside [`SUMMARY`] and [`MARKER`].
const TOP_FILES: [&str; 6] = ["job.json", "states.csv", "history.csv", "turns.csv", "run.pvd", "timings.json"];
/// Folders in a result folder with the extension of what is written there.
const SUBFOLDERS: [(&str, &str); 3] = [("fields", "vtu"), ("maps", "png"), ("charts", "png")];

/// Why output could not be written.
#[derive(Debug, thiserror::Error)]
pub enum OutputError {
    /// The folder holds a result.
    #[error("`{}` already holds a result; choose another folder, or replace it with `--overwrite`", folder.display())]
    HoldsResult {
        /// The folder.
        folder: PathBuf,
    },
    /// The folder holds the beginning of a result.
    #[error("`{}` holds an unfinished result: another run is writing it or was killed; choose another folder, or \
             replace it with `--overwrite`", folder.display())]
    HoldsUnfinished {
        /// The folder.
        folder: PathBuf,
    },
    /// The folder holds something else.
    #[error("`{}` is not empty and holds no result of coilwright, so nothing is written there, `--overwrite` or not; \
             choose an empty or a new folder", folder.display())]
    HoldsOther {
        /// The folder.
        folder: PathBuf,
    },
    /// There is a file of that name.
    #[error("`{}` is a file, and a folder is needed; choose another name", path.display())]
    NotAFolder {
        /// The path.
        path: PathBuf,
    },
    /// The system refused.
    #[error("`{}` could not be {action}: {source}", path.display())]
    System {
        /// What was tried, as a participle.
        action: &'static str,
        /// On what.
        path: PathBuf,
        /// What the system said.
        source: io::Error,
    },
    /// A picture would replace something that is not a picture.
    #[error("`{}` is not a picture to replace; choose a new name that ends in `.png`", path.display())]
    NotAPicture {
        /// The path.
        path: PathBuf,
    },
    /// Standard output could not be written.
    #[error("standard output could not be written: {0}")]
    Stdout(#[from] io::Error),
}

fn system(action: &'static str, path: &Path) -> impl FnOnce(io::Error) -> OutputError {
    let path = path.to_path_buf();
    move |source| OutputError::System { action, path, source }
}

/// Refuses a path for a picture that does not end in `.png`, or that holds a file that is no PNG picture.
///
/// # Errors
/// [`OutputError::NotAPicture`].
pub fn picture_path(path: &Path) -> Result<(), OutputError> {
    let named = path.extension().is_some_and(|e| e.eq_ignore_ascii_case("png"));
    let mut begin = [0; 8];
    let free = match fs::File::open(path) {
        Ok(mut file) => file.read_exact(&mut begin).is_ok() && begin == PNG_BEGIN,
        Err(error) => error.kind() == io::ErrorKind::NotFound,
    };
    if named && free { Ok(()) } else { Err(OutputError::NotAPicture { path: path.to_path_buf() }) }
}

/// What a path holds before a run.
enum Holding {
    Nothing,
    EmptyFolder,
    Result,
}

fn look(folder: &Path, overwrite: bool) -> Result<Holding, OutputError> {
    let own = || folder.to_path_buf();
    let kind = match fs::metadata(folder) {
        Err(error) if error.kind() == io::ErrorKind::NotFound => return Ok(Holding::Nothing),
        other => other.map_err(system("looked at", folder))?,
    };
    if !kind.is_dir() {
        return Err(OutputError::NotAFolder { path: own() });
    }
    let mut entries = fs::read_dir(folder).map_err(system("listed", folder))?;
    if entries.next().is_none() {
        return Ok(Holding::EmptyFolder);
    }
    let (finished, unfinished) = (folder.join(SUMMARY).is_file(), folder.join(MARKER).is_file());
    match (finished || unfinished, overwrite) {
        (false, _) => Err(OutputError::HoldsOther { folder: own() }),
        (true, true) => Ok(Holding::Result),
        (true, false) if unfinished => Err(OutputError::HoldsUnfinished { folder: own() }),
        (true, false) => Err(OutputError::HoldsResult { folder: own() }),
    }
}

/// Refuses a folder that holds something, without touching it.
///
/// # Errors
/// As [`Folder::prepare`], for what can be told by looking.
pub fn inspect(folder: &Path, overwrite: bool) -> Result<(), OutputError> {
    look(folder, overwrite).map(|_| ())
}

/// A folder that can be written to. Dropped before anything was written, it leaves things as they were.
#[derive(Debug)]
pub struct Folder {
    path: PathBuf,
    /// Folders that were made for it, outermost first.
    made: Vec<PathBuf>,
    marked: bool,
    begun: bool,
}

impl Folder {
    /// Makes the folder if need be and proves that a file can be written in it.
    ///
    /// # Errors
    /// The folder holds something, is a file, or cannot be made or written to.
    pub fn prepare(path: &Path, overwrite: bool) -> Result<Self, OutputError> {
        let holding = look(path, overwrite)?;
        let mut folder = Self { path: path.to_path_buf(), made: Vec::new(), marked: false, begun: false };
        if matches!(holding, Holding::Nothing) {
            folder.make()?;
        }
        if matches!(holding, Holding::Result) {
            let probe = path.join("probe.tmp");
            fs::write(&probe, MARKER_TEXT).map_err(system("written", &probe))?;
            fs::remove_file(&probe).map_err(system("removed", &probe))?;
        } else {
            folder.mark()?;
        }
        Ok(folder)
    }

    fn make(&mut self) -> Result<(), OutputError> {
        let missing: Vec<&Path> =
            self.path.ancestors().take_while(|p| !p.as_os_str().is_empty() && !p.exists()).collect();
        for path in missing.into_iter().rev() {
            match fs::create_dir(path) {
                Ok(()) => self.made.push(path.to_path_buf()),
                Err(error) if error.kind() == io::ErrorKind::AlreadyExists && path.is_dir() => {}
                Err(error) => return Err(system("made", path)(error)),
            }
        }
        Ok(())
    }

    fn mark(&mut self) -> Result<(), OutputError> {
        let marker = self.path.join(MARKER);
        fs::write(&marker, MARKER_TEXT).map_err(system("written", &marker))?;
        self.marked = true;
        Ok(())
    }

    /// Removes what is left of an earlier result, and marks the folder as unfinished.
    ///
    /// # Errors
    /// A file cannot be removed or written.
    pub fn begin(&mut self) -> Result<(), OutputError> {
        self.begun = true;
        self.mark()?;
        for name in TOP_FILES.iter().chain(&[SUMMARY]) {
            remove_if_there(&self.path.join(name))?;
        }
        for (name, extension) in SUBFOLDERS {
            let subfolder = self.path.join(name);
            let Ok(entries) = fs::read_dir(&subfolder) else { continue };
            for entry in entries {
                let path = entry.map_err(system("listed", &subfolder))?.path();
                if path.extension().is_some_and(|e| e == extension) {
                    remove_if_there(&path)?;
                }
            }
        }
        Ok(())
    }

    /// Writes one file; `name` is relative to the folder, with `/` between its parts.
    ///
    /// # Errors
    /// The file or its folder cannot be written.
    pub fn write(&self, name: &str, bytes: &[u8]) -> Result<(), OutputError> {
        let path = name.split('/').fold(self.path.clone(), |path, part| path.join(part));
        if let Some(parent) = path.parent() {
            fs::create_dir_all(parent).map_err(system("made", parent))?;
        }
        write_file(&path, bytes)
    }

    /// Writes the summary and takes the mark away: the result is complete.
    ///
    /// # Errors
    /// The summary cannot be written or the mark cannot be removed.
    pub fn finish(mut self, summary: &[u8]) -> Result<(), OutputError> {
        self.write(SUMMARY, summary)?;
        remove_if_there(&self.path.join(MARKER))?;
        self.marked = false;
        self.made.clear();
        Ok(())
    }
}

impl Drop for Folder {
    /// Undoes what [`Folder::prepare`] made, where nothing was written since. Failures here change nothing that matters.
    fn drop(&mut self) {
        if self.begun {
            return;
        }
        if self.marked {
            let _ = fs::remove_file(self.path.join(MARKER));
        }
        for path in self.made.iter().rev() {
            let _ = fs::remove_dir(path);
        }
    }
}

fn remove_if_there(path: &Path) -> Result<(), OutputError> {
    match fs::remove_file(path) {
        Err(error) if error.kind() != io::ErrorKind::NotFound => Err(system("removed", path)(error)),
        _ => Ok(()),
    }
}

/// Writes a file to a temporary name beside its own and renames it.
///
/// # Errors
/// The file cannot be written or renamed.
pub fn write_file(path: &Path, bytes: &[u8]) -> Result<(), OutputError> {
    let mut temporary = path.as_os_str().to_owned();
    temporary.push(".tmp");
    let temporary = PathBuf::from(temporary);
    let written = fs::File::create(&temporary).and_then(|mut file| file.write_all(bytes));
    written
        .map_err(system("written", path))
        .and_then(|()| fs::rename(&temporary, path).map_err(system("put in place", path)))
        .inspect_err(|_| {
            let _ = fs::remove_file(&temporary);
        })
}
