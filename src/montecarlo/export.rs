//! One row a lifetime, draws and figures, for programs that go on with them.

use std::io::{self, Write};
use std::sync::Arc;

use parquet::data_type::{DoubleType, Int64Type};
use parquet::file::metadata::KeyValue;
use parquet::file::properties::WriterProperties;
use parquet::file::writer::SerializedFileWriter;
use parquet::schema::types::Type;

use super::figures::plain;
use super::{Design, Sample, draws, figure_names};
use crate::lifetime::Plan;

/// Lifetimes of one row group, and of one batch of draws.
const GROUP: usize = 16_384;

/// Names of the columns after the lifetime's number: draws with their units, then figures.
fn names(plan: &Plan) -> Vec<String> {
    let drawn = plan.scenario().parameters.as_slice().iter().map(|p| match p.unit {
        "" => plain(&p.name),
        unit => format!("{}_{}", plain(&p.name), plain(unit)),
    });
    drawn.chain(figure_names(plan)).collect()
}

/// Calls `take` with the number of the first lifetime and the columns of each group.
fn groups(plan: &Plan, sample: &mut Sample, first: u64, mut take: impl FnMut(u64, &[Vec<f64>]) -> io::Result<()>) -> io::Result<()> {
    let design: Design = sample.design;
    let ids: Vec<_> = plan.scenario().parameters.ids().collect();
    let figures = sample.store.columns();
    let rows = sample.store.rows();
    let mut columns: Vec<Vec<f64>> = vec![Vec::with_capacity(GROUP); ids.len() + figures];
    let mut begun = first;
    let mut seen = 0;
    sample.store.for_each(|row| {
        for (column, value) in columns.iter_mut().skip(ids.len()).zip(row) {
            column.push(*value);
        }
        seen += 1;
        let gathered = columns.last().map_or(0, Vec::len);
        if gathered == GROUP || seen == rows {
            let drawn = draws(plan, &design, begun, gathered);
            for (column, id) in columns.iter_mut().zip(&ids) {
                column.extend(drawn.iter().map(|draw| draw.value(*id)));
            }
            take(begun, &columns)?;
            begun += gathered as u64;
            columns.iter_mut().for_each(Vec::clear);
        }
        Ok(())
    })
}

/// Writes the lifetimes from number `first` on as CSV with a heading.
///
/// # Errors
/// It cannot be written.
pub fn export_csv(plan: &Plan, sample: &mut Sample, first: u64, out: &mut impl Write) -> io::Result<()> {
    let heading = std::iter::once("lifetime".to_owned()).chain(names(plan)).collect::<Vec<_>>().join(",");
    writeln!(out, "{heading}")?;
    groups(plan, sample, first, |begun, columns| {
        let rows = columns.first().map_or(0, Vec::len);
        for (row, lifetime) in (0..rows).zip(begun..) {
            write!(out, "{lifetime}")?;
            for column in columns {
                write!(out, ",{}", column[row])?;
            }
            writeln!(out)?;
        }
        Ok(())
    })
}

/// Writes the lifetimes from number `first` on as Parquet: doubles, without compression.
///
/// # Errors
/// It cannot be written.
pub fn export_parquet(
    plan: &Plan,
    sample: &mut Sample,
    first: u64,
    about: &[(&str, String)],
    out: &mut (impl Write + Send),
) -> io::Result<()> {
    let field = |name: &str, kind: parquet::basic::Type| {
        Type::primitive_type_builder(name, kind).with_repetition(parquet::basic::Repetition::REQUIRED).build().map(Arc::new)
    };
    let mut fields = vec![field("lifetime", parquet::basic::Type::INT64).map_err(io::Error::other)?];
    for name in names(plan) {
        fields.push(field(&name, parquet::basic::Type::DOUBLE).map_err(io::Error::other)?);
    }
    let schema = Type::group_type_builder("lifetimes").with_fields(fields).build().map_err(io::Error::other)?;
    let about = about.iter().map(|(key, value)| KeyValue::new((*key).to_owned(), value.clone())).collect();
    let properties = WriterProperties::builder()
        // Draws hardly repeat: a dictionary would only cost time.
        .set_dictionary_enabled(false)
        .set_key_value_metadata(Some(about))
        .build();
    let mut writer = SerializedFileWriter::new(out, Arc::new(schema), Arc::new(properties)).map_err(io::Error::other)?;
    groups(plan, sample, first, |begun, columns| {
        let write = || -> parquet::errors::Result<()> {
            let mut group = writer.next_row_group()?;
            let rows = columns.first().map_or(0, Vec::len);
            let numbers: Vec<i64> = (begun..).take(rows).map(|n| i64::try_from(n).unwrap_or(i64::MAX)).collect();
            if let Some(mut column) = group.next_column()? {
                column.typed::<Int64Type>().write_batch(&numbers, None, None)?;
                column.close()?;
            }
            for values in columns {
                if let Some(mut column) = group.next_column()? {
                    column.typed::<DoubleType>().write_batch(values, None, None)?;
                    column.close()?;
                }
            }
            group.close()?;
            Ok(())
        };
        let mut write = write;
        write().map_err(io::Error::other)
    })?;
    writer.close().map_err(io::Error::other)?;
    Ok(())
}
