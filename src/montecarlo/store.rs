//! Values of many lifetimes kept on disk, and order statistics of them in bounded memory.

use std::fs::File;
use std::io::{self, Read, Seek, SeekFrom, Write};

/// Rows gathered before they are written, column by column.
const BLOCK: usize = 2048;
/// Most rows of which a column is sorted in memory, 64 MB of it.
const IN_MEMORY: usize = 1 << 23;
/// Bits of a key that one pass over a longer column decides.
const DIGIT_BITS: u32 = 11;
const BINS: usize = 1 << DIGIT_BITS;
const PASSES: u32 = 6;

/// Rows of `columns` numbers each, in a temporary file that the system removes by itself.
///
/// The file holds blocks of rows, each column by column, so that one column is read without the others.
#[derive(Debug)]
pub struct Store {
    file: File,
    columns: usize,
    rows: usize,
    /// Rows that are not yet written.
    waiting: Vec<f64>,
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
        Ok(Self { file: tempfile::tempfile()?, columns, rows: 0, waiting: Vec::with_capacity(BLOCK * columns) })
    }

    /// Adds one row; further values than there are columns are left out, missing ones are zero.
    ///
    /// # Errors
    /// The disk is full.
    pub fn push(&mut self, row: &[f64]) -> io::Result<()> {
        self.waiting.extend((0..self.columns).map(|column| row.get(column).copied().unwrap_or(0.0)));
        self.rows += 1;
        if self.waiting.len() == BLOCK * self.columns {
            let rows = BLOCK;
            let bytes: Vec<u8> = (0..self.columns)
                .flat_map(|column| (0..rows).map(move |row| (row, column)))
                .flat_map(|(row, column)| self.waiting[row * self.columns + column].to_le_bytes())
                .collect();
            self.file.seek(SeekFrom::End(0))?;
            self.file.write_all(&bytes)?;
            self.waiting.clear();
        }
        Ok(())
    }

    /// How many rows there are.
    #[must_use]
    pub fn rows(&self) -> usize {
        self.rows
    }

    /// How many columns there are.
    #[must_use]
    pub fn columns(&self) -> usize {
        self.columns
    }

    /// Calls `take` with every row in order.
    ///
    /// # Errors
    /// The file cannot be read, or `take` says so.
    pub fn for_each(&mut self, mut take: impl FnMut(&[f64]) -> io::Result<()>) -> io::Result<()> {
        let width = self.columns;
        let mut bytes = vec![0_u8; BLOCK * width * 8];
        let mut row = vec![0.0; width];
        self.file.seek(SeekFrom::Start(0))?;
        for _ in 0..self.rows / BLOCK {
            self.file.read_exact(&mut bytes)?;
            let numbers: Vec<f64> = bytes.chunks_exact(8).map(number).collect();
            for place in 0..BLOCK {
                for (column, value) in row.iter_mut().enumerate() {
                    *value = numbers[column * BLOCK + place];
                }
                take(&row)?;
            }
        }
        self.waiting.chunks_exact(width.max(1)).try_for_each(take)
    }

    /// Calls `take` with every value of a column in order.
    fn for_each_in(&mut self, column: usize, mut take: impl FnMut(f64)) -> io::Result<()> {
        let mut bytes = vec![0_u8; BLOCK * 8];
        for block in 0..self.rows / BLOCK {
            self.file.seek(SeekFrom::Start(((block * self.columns + column) * BLOCK * 8) as u64))?;
            self.file.read_exact(&mut bytes)?;
            bytes.chunks_exact(8).map(number).for_each(&mut take);
        }
        self.waiting.iter().skip(column).step_by(self.columns.max(1)).copied().for_each(take);
        Ok(())
    }

    /// Whether a column fits in memory.
    #[must_use]
    pub fn fits(&self) -> bool {
        self.rows <= IN_MEMORY
    }

    /// All values of a column in order.
    ///
    /// # Errors
    /// The file cannot be read.
    pub fn column(&mut self, column: usize) -> io::Result<Vec<f64>> {
        let mut all = Vec::with_capacity(self.rows);
        self.for_each_in(column, |value| all.push(value))?;
        Ok(all)
    }

    /// Goes through a column in order without holding it.
    ///
    /// # Errors
    /// The file cannot be read.
    pub fn scan(&mut self, column: usize, take: impl FnMut(f64)) -> io::Result<()> {
        self.for_each_in(column, take)
    }

    /// Order statistics of a column, exactly; a rank counts from the smallest, 1 to the number of rows, and one outside gives NaN.
    ///
    /// A column that fits is sorted, a longer one searched digit by digit in six passes over the file.
    ///
    /// # Errors
    /// The file cannot be read.
    pub fn select(&mut self, column: usize, ranks: &[usize]) -> io::Result<Vec<f64>> {
        if self.fits() {
            let mut sorted = self.column(column)?;
            sorted.sort_unstable_by(f64::total_cmp);
            let at = |rank: &usize| rank.checked_sub(1).and_then(|index| sorted.get(index)).copied().unwrap_or(f64::NAN);
            return Ok(ranks.iter().map(at).collect());
        }
        self.search(column, ranks)
    }

    fn search(&mut self, column: usize, ranks: &[usize]) -> io::Result<Vec<f64>> {
        // Bits decided so far, and the rank among the rows that share them.
        let mut found: Vec<(u64, usize)> = ranks.iter().map(|rank| (0, *rank)).collect();
        for pass in 0..PASSES {
            let shift = 64_u32.saturating_sub(DIGIT_BITS * (pass + 1));
            let above = 64 - DIGIT_BITS * pass;
            let mut counts = vec![vec![0_u32; BINS]; ranks.len()];
            self.for_each_in(column, |value| {
                let key = key(value);
                for ((prefix, _), bins) in found.iter().zip(&mut counts) {
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
        Ok(ranks.iter().zip(found).map(|(rank, (key, _))| if (1..=rows).contains(rank) { value(key) } else { f64::NAN }).collect())
    }
}

fn number(bytes: &[u8]) -> f64 {
    f64::from_le_bytes(bytes.try_into().unwrap_or_default())
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
        let numbers: Vec<f64> = (0..5003_u32).map(|k| f64::from((k * 7919) % 1009) - 500.5 + f64::from(k % 3) * 1e-9).collect();
        let mut store = Store::new(2).unwrap();
        for number in &numbers {
            store.push(&[*number, -number * 1e-200]).unwrap();
        }
        let bits = |values: &[f64]| values.iter().map(|x| x.to_bits()).collect::<Vec<_>>();
        assert_eq!(bits(&store.column(0).unwrap()), bits(&numbers));
        let mut rows = Vec::new();
        store
            .for_each(|row| {
                rows.push(row[0]);
                Ok(())
            })
            .unwrap();
        assert_eq!(bits(&rows), bits(&numbers));
        let mut sorted = numbers.clone();
        sorted.sort_by(f64::total_cmp);
        let ranks = [1, 2, 499, 4753, 5002, 5003, 5004, 0];
        let expected = ranks.map(|rank: usize| rank.checked_sub(1).and_then(|k| sorted.get(k)).copied());
        for found in [store.select(0, &ranks).unwrap(), store.search(0, &ranks).unwrap()] {
            for (found, expected) in found.iter().zip(expected) {
                assert!(expected.map_or(found.is_nan(), |expected| expected.to_bits() == found.to_bits()));
            }
        }
        let small = store.search(1, &[1]).unwrap()[0];
        assert_eq!(small.to_bits(), (-sorted[5002] * 1e-200).to_bits());
    }
}
