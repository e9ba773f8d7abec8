//! A share of the lifetimes in a file of its own, and shares put together again.
//!
//! A part is a line that names the format, a line of JSON that says what it is a part of, the figures of its lifetimes as
//! little-endian doubles, row by row, and the SHA-256 of all that.

use std::fs::File;
use std::io::{self, BufReader, Read as _, Seek as _, SeekFrom, Write};
use std::path::Path;

use serde::{Deserialize, Serialize};
use sha2::{Digest, Sha256};

use super::{Design, Ended, Sample, Store};
use crate::mission::Sampling;

const MAGIC: &str = "couplet part 1";
/// Longest header that is read, bytes.
const MOST_HEADER: u64 = 1 << 20;
const DIGEST: u64 = 32;

/// What a part is a part of.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct PartHeader {
    /// Version of the program.
    pub version: String,
    /// SHA-256 of the merged configuration.
    pub config_sha256: String,
    /// Seed.
    pub seed: u64,
    /// Lifetimes in all.
    pub lifetimes: u64,
    /// Latin hypercubes; 0 for plain draws.
    pub replicates: u64,
    /// Which part, from 1.
    pub part: u64,
    /// Of how many.
    pub parts: u64,
    /// Names of the columns.
    pub columns: Vec<String>,
}

/// Why parts do not go together.
#[derive(Debug, thiserror::Error)]
pub enum JoinError {
    /// The machine's fault.
    #[error(transparent)]
    Io(#[from] io::Error),
    /// The input's fault: what is wrong, and how to mend it.
    #[error("{message}\n  = help: {help}")]
    Part {
        /// What is wrong.
        message: String,
        /// How to mend it.
        help: String,
    },
}

fn refuse<T>(message: impl Into<String>, help: impl Into<String>) -> Result<T, JoinError> {
    Err(JoinError::Part { message: message.into(), help: help.into() })
}

impl PartHeader {
    /// The header of part `part` of `parts` of a design.
    #[must_use]
    pub fn new(version: &str, config_sha256: &str, design: &Design, (part, parts): (u64, u64), columns: Vec<String>) -> Self {
        Self {
            version: version.to_owned(),
            config_sha256: config_sha256.to_owned(),
            seed: design.seed,
            lifetimes: design.lifetimes,
            replicates: match design.sampling {
                Sampling::Plain => 0,
                Sampling::LatinHypercube(replicates) => replicates,
            },
            part,
            parts,
            columns,
        }
    }
}

/// Writes a part.
///
/// # Errors
/// It cannot be written.
pub fn write_part(header: &PartHeader, store: &mut Store, out: &mut impl Write) -> io::Result<()> {
    let mut digest = Sha256::new();
    let head = format!("{MAGIC}\n{}\n", serde_json::to_string(header)?);
    digest.update(head.as_bytes());
    out.write_all(head.as_bytes())?;
    let mut bytes = Vec::new();
    store.for_each(|row| {
        bytes.clear();
        bytes.extend(row.iter().flat_map(|value| value.to_le_bytes()));
        digest.update(&bytes);
        out.write_all(&bytes)
    })?;
    out.write_all(&digest.finalize())
}

/// A part that has been opened: its header, and where its numbers begin.
struct Opened {
    name: String,
    header: PartHeader,
    file: BufReader<File>,
    rows: u64,
}

/// Puts parts together to the sample of one run; `expected` is the header that the configuration at hand would give to a part.
///
/// # Errors
/// A part is none, is damaged, is of another configuration, seed or version, is missing or doubled.
pub fn join(expected: &PartHeader, design: Design, files: &[impl AsRef<Path>]) -> Result<Sample, JoinError> {
    let mut parts = files.iter().map(|file| open(file.as_ref(), expected, &design)).collect::<Result<Vec<_>, _>>()?;
    let Some(of) = parts.first().map(|part| part.header.parts) else {
        return refuse("no part is named", "name all parts, such as `heron-*.part`");
    };
    parts.sort_by_key(|part| part.header.part);
    for pair in parts.windows(2) {
        if let [a, b] = pair {
            if a.header.parts != b.header.parts {
                let message = format!("`{}` is one of {} parts, `{}` one of {}", a.name, a.header.parts, b.name, b.header.parts);
                return refuse(message, "join parts of the same division");
            }
            if a.header.part == b.header.part {
                return refuse(format!("`{}` and `{}` are both part {}", a.name, b.name, a.header.part), "name each part once");
            }
        }
    }
    let missing: Vec<String> = (1..=of).filter(|k| !parts.iter().any(|part| part.header.part == *k)).map(|k| k.to_string()).collect();
    if !missing.is_empty() {
        let list = missing.join(", ");
        return refuse(format!("of {of} parts these are missing: {list}"), format!("compute them with `--part {}/{of}`", missing[0]));
    }
    let mut store = Store::new(expected.columns.len())?;
    for part in &mut parts {
        part.read_into(&mut store)?;
    }
    Ok(Sample { store, design, ended: Ended::Number })
}

fn open(file: &Path, expected: &PartHeader, design: &Design) -> Result<Opened, JoinError> {
    let name = file.display().to_string();
    let unreadable =
        |error: io::Error| JoinError::Part { message: format!("`{name}` cannot be read: {error}"), help: "check the name".into() };
    let mut file = BufReader::new(File::open(file).map_err(unreadable)?);
    let size = file.get_ref().metadata().map_err(unreadable)?.len();
    let Some(magic) = line(&mut file).filter(|line| line == MAGIC) else {
        return refuse(format!("`{name}` is no part of a run"), "name files that `couplet budget --part K/N --out FILE` wrote");
    };
    let header = line(&mut file).unwrap_or_default();
    let begun = (magic.len() + header.len() + 2) as u64;
    let Ok(header) = serde_json::from_str::<PartHeader>(&header) else {
        return refuse(format!("the header of `{name}` cannot be read"), "compute this part again");
    };
    let differs = |what: &str, found: String, wanted: String| {
        refuse(format!("`{name}` is of another {what}: {found}, here {wanted}"), format!("join parts of the same {what}"))
    };
    if header.version != expected.version {
        return differs("version of the program", header.version, expected.version.clone());
    }
    if header.config_sha256 != expected.config_sha256 {
        let help = "give the configuration, overlays and settings that the parts were computed with";
        let (found, wanted) = (&header.config_sha256, &expected.config_sha256);
        return refuse(format!("`{name}` is of another configuration: SHA-256 {found:.12}…, here {wanted:.12}…"), help);
    }
    if header.seed != expected.seed {
        return differs("seed", header.seed.to_string(), expected.seed.to_string());
    }
    if header.lifetimes != expected.lifetimes || header.replicates != expected.replicates || header.columns != expected.columns {
        return differs("number of lifetimes", header.lifetimes.to_string(), expected.lifetimes.to_string());
    }
    let range = design.part(header.part, header.parts);
    let rows = range.end.saturating_sub(range.start);
    if header.part == 0 || header.part > header.parts || size != begun + rows * 8 * header.columns.len() as u64 + DIGEST {
        return refuse(format!("`{name}` is not whole: its {size} bytes are not what its header promises"), "compute this part again");
    }
    file.seek(SeekFrom::Start(0))?;
    Ok(Opened { name, header, file, rows })
}

/// One line of text without its end.
fn line(file: &mut BufReader<File>) -> Option<String> {
    use io::BufRead as _;
    let mut text = Vec::new();
    file.by_ref().take(MOST_HEADER).read_until(b'\n', &mut text).ok()?;
    text.pop().filter(|end| *end == b'\n')?;
    String::from_utf8(text).ok()
}

impl Opened {
    /// Reads the rows and checks the digest of the whole file.
    fn read_into(&mut self, store: &mut Store) -> Result<(), JoinError> {
        let mut digest = Sha256::new();
        for _ in 0..2 {
            let text = line(&mut self.file).unwrap_or_default();
            digest.update(text.as_bytes());
            digest.update(b"\n");
        }
        let mut bytes = vec![0_u8; self.header.columns.len() * 8];
        for _ in 0..self.rows {
            self.file.read_exact(&mut bytes)?;
            digest.update(&bytes);
            let row: Vec<f64> = bytes.chunks_exact(8).map(|raw| f64::from_le_bytes(raw.try_into().unwrap_or_default())).collect();
            store.push(&row)?;
        }
        let mut told = [0_u8; 32];
        self.file.read_exact(&mut told)?;
        if digest.finalize().as_slice() != told {
            return refuse(format!("`{}` is damaged: its checksum does not agree", self.name), "compute this part again");
        }
        Ok(())
    }
}
