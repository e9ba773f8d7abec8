//! Writing results and complaints.

use std::fmt::Display;
use std::fs::{File, OpenOptions, Permissions};
use std::io::{ErrorKind, IsTerminal, Write};
use std::path::{Path, PathBuf};

use tempfile::NamedTempFile;

use super::args::{Common, Output};
use super::scenario::Loaded;

/// Why the command could not do its work.
#[derive(Debug)]
pub(super) enum Failure {
    /// The input or the call is wrong.
    Input(String),
    /// The input is wrong, and has been told as a result.
    Told,
    /// The program or the machine is at fault.
    Machine(String),
    /// The user stopped it; what was complete by then has been reported.
    Stopped(String),
}

impl Failure {
    pub(super) fn message(&self) -> &str {
        match self {
            Self::Input(message) | Self::Machine(message) | Self::Stopped(message) => message,
            Self::Told => "",
        }
    }

    pub(super) const fn status(&self) -> u8 {
        match self {
            Self::Input(_) | Self::Told => 2,
            Self::Machine(_) => 3,
            Self::Stopped(_) => super::interrupt::STATUS,
        }
    }
}

/// Where a result goes: opened before anything is computed, complete only at the end.
#[derive(Debug)]
pub(super) enum Target {
    Standard,
    /// A device, a pipe or an open stream.
    Stream {
        file: File,
        path: PathBuf,
    },
    File {
        path: PathBuf,
        /// Those of the file that is there.
        permissions: Option<Permissions>,
    },
}

impl Target {
    /// Opens the target of a call that reads the configuration, its overlays and the files they name.
    pub(super) fn of(common: &Common, loaded: &Loaded) -> Result<Self, Failure> {
        let folder = common.file.parent().unwrap_or_else(|| Path::new(""));
        let named: Vec<PathBuf> = loaded.provenance.ephemerides.keys().map(|file| folder.join(file)).collect();
        let inputs: Vec<&Path> = std::iter::once(&common.file).chain(&common.overlays).chain(&named).map(PathBuf::as_path).collect();
        Self::open(&common.output, &inputs)
    }

    /// Opens the target, which must be none of the `inputs`.
    ///
    /// A file is written beside its final place and renamed at the end, so that it appears whole or
    /// not at all. A symbolic link is followed. What is no regular file is written straight to:
    /// renaming would put a file in the place of a device or a pipe.
    pub(super) fn open(output: &Output, inputs: &[&Path]) -> Result<Self, Failure> {
        let Some(path) = &output.out else { return Ok(Self::Standard) };
        refuse_inputs(path, inputs)?;
        if path == Path::new("/dev/stdout") {
            return Ok(Self::Standard);
        }
        check_folder(path)?;
        match std::fs::metadata(path) {
            Err(error) if error.kind() == ErrorKind::NotFound && !path.is_symlink() => Self::draft(path.clone(), None),
            Err(error) if error.kind() == ErrorKind::NotFound => Err(unwritable(path, "it is a symbolic link to nothing", NAME_ANOTHER)),
            Err(error) => Err(unwritable(path, &error, NAME_ANOTHER)),
            Ok(found) if found.is_dir() => Err(unwritable(path, "it is a folder", NAME_ANOTHER)),
            Ok(found) if !found.is_file() || is_stream(path) => Self::stream(path),
            Ok(found) => {
                // Renaming would pass over the write protection of the file that is there.
                let writable = OpenOptions::new().write(true).open(path);
                let real = writable.and_then(|_| path.canonicalize()).map_err(|error| unwritable(path, &error, NAME_ANOTHER))?;
                Self::draft(real, Some(found.permissions()))
            }
        }
    }

    fn stream(path: &Path) -> Result<Self, Failure> {
        // Appending spares what a redirected stream already holds; devices and pipes do not care.
        let file = OpenOptions::new().append(true).open(path).map_err(|error| unwritable(path, &error, NAME_ANOTHER))?;
        Ok(Self::Stream { file, path: path.to_path_buf() })
    }

    /// Makes sure that a file can be made, and leaves nothing behind until there is something to write.
    fn draft(path: PathBuf, permissions: Option<Permissions>) -> Result<Self, Failure> {
        drafted(&path, permissions.as_ref())?;
        Ok(Self::File { path, permissions })
    }

    /// Writes the whole result.
    pub(super) fn finish(self, text: &str) -> Result<(), Failure> {
        self.finish_with(|out| out.write_all(text.as_bytes()))
    }

    /// Writes what `write` gives; a file appears whole or not at all.
    pub(super) fn finish_with(self, write: impl FnOnce(&mut Out<'_>) -> std::io::Result<()>) -> Result<(), Failure> {
        let through = |to: &mut (dyn Write + Send)| {
            let mut out = Out(std::io::BufWriter::with_capacity(1 << 16, to));
            write(&mut out).and_then(|()| out.flush())
        };
        match self {
            Self::Standard => written(through(&mut std::io::stdout()), "the result"),
            Self::Stream { mut file, path } => written(through(&mut file), path.display()),
            Self::File { path, permissions } => {
                let mut draft = drafted(&path, permissions.as_ref())?;
                let synced = through(draft.as_file_mut()).and_then(|()| draft.as_file().sync_all());
                let kept = synced.and_then(|()| draft.persist(&path).map_err(|error| error.error));
                kept.map(drop).map_err(|error| Failure::Machine(format!("error: cannot write {}: {error}", path.display())))
            }
        }
    }
}

/// What a result is written to.
pub(super) struct Out<'a>(std::io::BufWriter<&'a mut (dyn Write + Send)>);

impl Write for Out<'_> {
    fn write(&mut self, bytes: &[u8]) -> std::io::Result<usize> {
        self.0.write(bytes)
    }

    fn flush(&mut self) -> std::io::Result<()> {
        self.0.flush()
    }
}

/// A file beside the final place, which the system or this program removes unless it is renamed.
fn drafted(path: &Path, permissions: Option<&Permissions>) -> Result<NamedTempFile, Failure> {
    let refused = |error| unwritable(path, format!("no file can be made in its folder: {error}"), NAME_ANOTHER);
    let mut builder = tempfile::Builder::new();
    #[cfg(unix)]
    {
        use std::os::unix::fs::PermissionsExt;
        // The default is private; a result is an ordinary file (the umask still applies).
        builder.permissions(Permissions::from_mode(0o666));
    }
    let draft = builder.prefix(".couplet-").tempfile_in(folder(path)).map_err(refused)?;
    if let Some(permissions) = permissions {
        draft.as_file().set_permissions(permissions.clone()).map_err(refused)?;
    }
    Ok(draft)
}

const NAME_ANOTHER: &str = "name a file in a folder that you may write to";

fn unwritable(path: &Path, reason: impl Display, help: impl Display) -> Failure {
    Failure::Machine(format!("error: cannot write {}: {reason}\n  = help: {help}", path.display()))
}

fn folder(path: &Path) -> &Path {
    path.parent().filter(|folder| !folder.as_os_str().is_empty()).unwrap_or_else(|| Path::new("."))
}

/// Whether the path stands for an open stream of the process, even one that leads to a regular file.
fn is_stream(path: &Path) -> bool {
    ["/dev/stderr", "/dev/fd", "/proc"].iter().any(|streams| path.starts_with(streams))
}

/// Refuses a target that is one of the files the result is computed from.
fn refuse_inputs(path: &Path, inputs: &[&Path]) -> Result<(), Failure> {
    // Without a canonical path the target is not there yet, or is no file that could be lost.
    let Ok(target) = path.canonicalize() else { return Ok(()) };
    let clash = |input: &&&Path| target.is_file() && input.canonicalize().is_ok_and(|input| input == target);
    match inputs.iter().find(clash) {
        None => Ok(()),
        Some(input) => Err(Failure::Input(format!(
            "error: `--out {}` would overwrite {}, which this call reads\n  = help: name another file, such as result.json",
            path.display(),
            input.display()
        ))),
    }
}

/// Names the folder of the target if it is missing or is none.
fn check_folder(path: &Path) -> Result<(), Failure> {
    let folder = folder(path);
    if folder.is_file() {
        return Err(unwritable(path, format!("{} is a file, not a folder", folder.display()), NAME_ANOTHER));
    }
    if folder.try_exists().is_ok_and(|exists| !exists) {
        let help = format!("create it with `mkdir -p {}`, or name another file", folder.display());
        return Err(unwritable(path, format!("the folder {} does not exist", folder.display()), help));
    }
    if path.to_string_lossy().ends_with(std::path::is_separator) && !path.exists() {
        return Err(unwritable(path, "it names a folder", NAME_ANOTHER));
    }
    Ok(())
}

/// What came of writing to a stream.
pub(super) fn written(outcome: std::io::Result<()>, what: impl Display) -> Result<(), Failure> {
    match outcome {
        // Whoever read the result has seen enough.
        Err(error) if error.kind() == ErrorKind::BrokenPipe => Ok(()),
        Err(error) => Err(Failure::Machine(format!("error: cannot write {what}: {error}"))),
        Ok(()) => Ok(()),
    }
}

/// Tells each warning in a line of its own on standard error.
pub(super) fn warn(warnings: &[String]) {
    for warning in warnings {
        // A name in it may hold a line break.
        complain(&format!("warning: {}", warning.replace(char::is_control, " ")));
    }
}

/// Tells the user on standard error.
pub(super) fn complain(message: &str) {
    // Nobody is left to tell if standard error is closed.
    let _ = writeln!(anstream::stderr().lock(), "{}", message.trim_end());
}

/// Whether standard error shows colour.
pub(super) fn styled() -> bool {
    std::io::stderr().is_terminal()
}
