//! Writing results and complaints.

use std::io::{ErrorKind, IsTerminal, Write};
use std::path::Path;

use tempfile::NamedTempFile;

use super::args::Output;

/// Why the command could not do its work.
#[derive(Debug)]
pub(super) enum Failure {
    /// The input or the call is wrong.
    Input(String),
    /// The program or the machine is at fault.
    Machine(String),
}

impl Failure {
    pub(super) fn message(&self) -> &str {
        match self {
            Self::Input(message) | Self::Machine(message) => message,
        }
    }

    pub(super) const fn status(&self) -> u8 {
        match self {
            Self::Input(_) => 2,
            Self::Machine(_) => 3,
        }
    }
}

/// Where a result goes: opened before anything is computed, complete only at the end.
#[derive(Debug)]
pub(super) enum Target {
    Standard,
    File { draft: NamedTempFile, path: std::path::PathBuf },
}

impl Target {
    /// Opens the target.
    ///
    /// A file is written beside its final place and renamed at the end, so that it appears whole or
    /// not at all.
    pub(super) fn open(output: &Output) -> Result<Self, Failure> {
        let Some(path) = &output.out else { return Ok(Self::Standard) };
        let refused = |reason: String| {
            Failure::Machine(format!(
                "error: cannot write {}: {reason}\n  = help: name a file in a folder that you may write to",
                path.display()
            ))
        };
        if path.is_dir() {
            return Err(refused("it is a folder".to_owned()));
        }
        let folder = path.parent().filter(|folder| !folder.as_os_str().is_empty()).unwrap_or_else(|| Path::new("."));
        let mut builder = tempfile::Builder::new();
        #[cfg(unix)]
        {
            use std::os::unix::fs::PermissionsExt;
            // The default is private; a result is an ordinary file (the umask still applies).
            builder.permissions(std::fs::Permissions::from_mode(0o666));
        }
        let draft = builder.prefix(".couplet-").tempfile_in(folder).map_err(|error| refused(error.to_string()))?;
        Ok(Self::File { draft, path: path.clone() })
    }

    /// Writes the whole result.
    pub(super) fn finish(self, text: &str) -> Result<(), Failure> {
        match self {
            Self::Standard => match std::io::stdout().lock().write_all(text.as_bytes()) {
                // Whoever read the result has seen enough.
                Err(error) if error.kind() == ErrorKind::BrokenPipe => Ok(()),
                Err(error) => Err(Failure::Machine(format!("error: cannot write the result: {error}"))),
                Ok(()) => Ok(()),
            },
            Self::File { mut draft, path } => {
                let failed = |error: &dyn std::fmt::Display| Failure::Machine(format!("error: cannot write {}: {error}", path.display()));
                draft.write_all(text.as_bytes()).and_then(|()| draft.as_file().sync_all()).map_err(|error| failed(&error))?;
                draft.persist(&path).map_err(|error| failed(&error.error))?;
                Ok(())
            }
        }
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
