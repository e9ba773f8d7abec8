//! Values of many lifetimes kept on disk, and order statistics selected from them in bounded memory.

use std::fs::File;
use std::io::{self, BufReader, BufWriter, Read, Seek, SeekFrom, Write};

/// Bits of a key that one pass over the file decides.
const DIGIT_BITS: u32 = 11;
const BINS: usize = 1 << DIGIT_BITS;
const PASSES: u32 = 6;

/// Rows of `columns` numbers each, in a temporary file that the system removes by itself.
#[derive(Debug)]
pub struct Store {
    file: BufWriter<File>,
    columns: usize,
    rows: usize,
}

/// One order statistic that is asked for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Wanted {
    /// Column.
    pub column: usize,
    /// Rank from the smallest, 1 to the number of rows.
    pub rank: usize,
}

/// A number as an integer that sorts the same way.
fn key(value: f64) -> u64 {
    let bits = value.to_bits();
    if bits >> 63 == 1 { !bits } else { bits | (1 << 63) }
}

fn value(key: u64) -> f64 {
    f64::from_bits(if key >> 63 == 1 { key & !(1 << 63) } else { !key })
}

impl Store {
    /// An empty store.
    ///
    /// # Errors
    /// No temporary file can be made.
    pub fn new(columns: usize) -> io::Result<Self> {
        Ok(Self { file: BufWriter::new(tempfile::tempfile()?), columns, rows: 0 })
    }

    /// Adds one row; further values than there are columns are left out, missing ones are zero.
    ///
    /// # Errors
    /// The disk is full.
    pub fn push(&mut self, row: &[f64]) -> io::Result<()> {
        for column in 0..self.columns {
            self.file.write_all(&row.get(column).copied().unwrap_or(0.0).to_le_bytes())?;
        }
        self.rows += 1;
        Ok(())
    }

    /// How many rows there are.
    #[must_use]
    pub fn rows(&self) -> usize {
        self.rows
    }

    /// Calls `take` with every row in order.
    ///
    /// # Errors
    /// The file cannot be read.
    pub fn for_each(&mut self, mut take: impl FnMut(&[f64])) -> io::Result<()> {
        self.file.flush()?;
        self.file.seek(SeekFrom::Start(0))?;
        let mut reader = BufReader::with_capacity(1 << 16, self.file.get_ref());
        let mut bytes = vec![0_u8; self.columns * 8];
        let mut row = vec![0.0; self.columns];
        for _ in 0..self.rows {
            reader.read_exact(&mut bytes)?;
            for (number, raw) in row.iter_mut().zip(bytes.chunks_exact(8)) {
                *number = f64::from_le_bytes(raw.try_into().unwrap_or_default());
            }
            take(&row);
        }
        self.file.seek(SeekFrom::End(0))?;
        Ok(())
    }

    /// The order statistics asked for, exactly, by radix selection: six passes over the file.
    ///
    /// A rank outside 1 to the number of rows gives NaN.
    ///
    /// # Errors
    /// The file cannot be read.
    pub fn select(&mut self, wanted: &[Wanted]) -> io::Result<Vec<f64>> {
        // Bits decided so far, and the rank among the rows that share them.
        let mut found: Vec<(u64, usize)> = wanted.iter().map(|w| (0, w.rank)).collect();
        for pass in 0..PASSES {
            let shift = 64_u32.saturating_sub(DIGIT_BITS * (pass + 1));
            let above = 64 - DIGIT_BITS * pass;
            let mut counts = vec![vec![0_u32; BINS]; wanted.len()];
            self.for_each(|row| {
                for ((w, (prefix, _)), bins) in wanted.iter().zip(&found).zip(&mut counts) {
                    let key = key(row[w.column]);
                    if above == 64 || key >> above == *prefix >> above {
                        bins[digit(key, shift, above)] += 1;
                    }
                }
            })?;
            for ((prefix, rank), bins) in found.iter_mut().zip(&counts) {
                for (bin, count) in bins.iter().enumerate() {
                    let count = *count as usize;
                    if *rank <= count {
                        *prefix |= (bin as u64) << shift;
                        break;
                    }
                    *rank -= count;
                }
            }
        }
        let rows = self.rows;
        Ok(wanted.iter().zip(found).map(|(w, (key, _))| if (1..=rows).contains(&w.rank) { value(key) } else { f64::NAN }).collect())
    }
}

/// Bits `shift..above` of a key.
fn digit(key: u64, shift: u32, above: u32) -> usize {
    let kept = if above == 64 { key } else { key & ((1 << above) - 1) };
    usize::try_from(kept >> shift).unwrap_or(0)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Against sorting, which is the definition of an order statistic.
    #[test]
    fn selection_agrees_with_sorting() {
        let numbers: Vec<f64> = (0..997_u32).map(|k| f64::from((k * 7919) % 1009) - 500.5 + f64::from(k % 3) * 1e-9).collect();
        let mut store = Store::new(2).unwrap();
        for number in &numbers {
            store.push(&[*number, -number * 1e-200]).unwrap();
        }
        let mut sorted = numbers.clone();
        sorted.sort_by(f64::total_cmp);
        let ranks = [1, 2, 499, 947, 996, 997];
        let wanted: Vec<_> =
            ranks.iter().flat_map(|rank| [Wanted { column: 0, rank: *rank }, Wanted { column: 1, rank: 998 - rank }]).collect();
        let found = store.select(&wanted).unwrap();
        for (pair, rank) in found.chunks(2).zip(ranks) {
            assert_eq!(pair[0].to_bits(), sorted[rank - 1].to_bits());
            assert_eq!(pair[1].to_bits(), (-sorted[rank - 1] * 1e-200).to_bits());
        }
        assert!(store.select(&[Wanted { column: 0, rank: 998 }]).unwrap()[0].is_nan());
    }
}
