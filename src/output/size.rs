//! How large a run file becomes: a few records are written into memory and measured.
//!
//! A file is a part that does not depend on the number of records, and chunks of 64 records that
//! compress about alike when the records are as far apart as those of the run.

use std::time::{Duration, Instant};

use super::error::Result;
use super::layout::{Block, CHUNK, Layout};
use super::schema::Schema;
use crate::series::Record;

/// Size and cost of a file, measured on a few records.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct MeasuredSize {
    fixed_bytes: f64,
    chunk_bytes: f64,
    chunk_time: Duration,
    record_values: usize,
}

impl MeasuredSize {
    /// Writes up to 64 records and a state into memory.
    ///
    /// # Errors
    /// If the table is unsound or HDF5 refuses.
    pub fn of(schema: &Schema, records: &[Record]) -> Result<Self> {
        schema.check()?;
        let records = &records[..records.len().min(CHUNK)];
        let layout = Layout::in_memory(schema)?;
        let empty = layout.size_bytes()?;
        let started = Instant::now();
        layout.write(0, &Block::gather(schema, records))?;
        let full = layout.size_bytes()?;
        let share = CHUNK as f64 / records.len().max(1) as f64;
        Ok(Self {
            fixed_bytes: empty as f64,
            chunk_bytes: full.saturating_sub(empty) as f64 * share,
            chunk_time: started.elapsed().mul_f64(share),
            record_values: schema.record_size(),
        })
    }

    /// Bytes of a finished file of so many records.
    pub fn file_bytes(&self, records: u64) -> f64 {
        self.fixed_bytes + self.chunk_bytes * records as f64 / CHUNK as f64
    }

    /// Bytes of the segments of so many records, which lie beside the file until it is complete.
    pub fn segment_bytes(&self, records: u64) -> f64 {
        let segments = records.div_ceil(CHUNK as u64) as f64;
        self.fixed_bytes * segments + self.chunk_bytes * records as f64 / CHUNK as f64
    }

    /// Bytes of 64 records in memory.
    pub fn chunk_memory_bytes(&self) -> f64 {
        (CHUNK * self.record_values * size_of::<f64>()) as f64
    }

    /// Time to compress and write so many records once.
    pub fn writing(&self, records: u64) -> Duration {
        self.chunk_time.mul_f64(records as f64 / CHUNK as f64)
    }
}
