//! Takes the records of a run and makes its file, so that a killed run keeps what it had.
//!
//! Format facts: 64 records fill a chunk and make a segment (see `segments`); the merged file
//! holds the records of all segments, in chunks of 64, and the last restart state. Merging reads
//! one segment at a time, so memory does not grow with the run. A segment that is not full yet is
//! saved when a minute has passed since the last one, or when asked, and replaced by a longer one
//! later: a killed run loses at most 64 records and at most a minute, or one record when it takes longer.
//!
//! Rules: an existing output, or segments of an unfinished run beside it, are refused unless
//! overwriting is allowed or the run goes on. Allowed, segments are deleted at the start; an
//! existing output stays until the new one is complete and takes its name.
//!
//! Sources: NetCDF-4 format specification; CF 1.11; POSIX rename.

use std::path::{Path, PathBuf};
use std::time::{Duration, Instant};

use super::claim::{Claim, Overwrite};
use super::error::{OutputError, Result};
use super::layout::{Block, CHUNK, Layout, Restart};
use super::netcdf4::narrow;
use super::reader::RunFile;
use super::schema::{AGE, Schema, check};
use super::segments;
use crate::series::Record;

#[cfg(test)]
mod tests;

/// Longest time between two saved segments while records come (tuned here: what somebody may
/// lose without regret).
const SAVE_AFTER: Duration = Duration::from_mins(1);

/// Writes one run. Dropped without [`RunWriter::finish`], it leaves its segments behind.
#[derive(Debug)]
pub struct RunWriter {
    /// Keeps other runs away from this output for as long as the writer lives.
    claim: Claim,
    schema: Schema,
    overwrite: Overwrite,
    record_size: usize,
    /// Records of the segment that is not full yet.
    buffer: Vec<Record>,
    /// How many of them are in a file already.
    saved: usize,
    saved_at: Instant,
    restart: Restart,
    /// Full segments.
    full: usize,
    last_age_kyr: Option<f64>,
}

impl RunWriter {
    /// Takes an output and begins a new run; see [`RunWriter::begin`].
    ///
    /// # Errors
    /// As [`RunWriter::begin`], or if the output cannot be taken.
    pub fn create(path: &Path, schema: Schema, overwrite: Overwrite) -> Result<Self> {
        schema.check()?;
        Self::begin(Claim::take(path)?, schema, overwrite)
    }

    /// Begins a new run.
    ///
    /// # Errors
    /// If the table is unsound, or the output or segments exist and may not be overwritten.
    pub fn begin(claim: Claim, schema: Schema, overwrite: Overwrite) -> Result<Self> {
        schema.check()?;
        claim.refuse(overwrite)?;
        claim.discard()?;
        let record_size = schema.record_size();
        Ok(Self {
            claim,
            schema,
            overwrite,
            record_size,
            buffer: Vec::with_capacity(CHUNK),
            saved: 0,
            saved_at: Instant::now(),
            restart: Restart::new(),
            full: 0,
            last_age_kyr: None,
        })
    }

    /// Goes on with an unfinished run, after the last record of its last segment.
    ///
    /// # Errors
    /// If there is no segment, one cannot be read or does not fit the table, or the output exists
    /// and may not be overwritten.
    pub fn go_on(claim: Claim, schema: Schema, overwrite: Overwrite) -> Result<Self> {
        schema.check()?;
        claim.refuse_output(overwrite)?;
        let files = claim.segments()?;
        let Some(last) = files.last() else {
            let path = claim.path().to_owned();
            return Err(OutputError::Empty { path });
        };
        let last = RunFile::open(last)?;
        let block = last.block(&schema)?;
        let restart = last.restart()?;
        drop(last);
        let mut buffer = block.records(&schema);
        let mut full = files.len() - 1;
        let last_age_kyr = buffer.last().map(|r| r.age_kyr);
        if buffer.len() == CHUNK {
            full += 1;
            buffer.clear();
        }
        Ok(Self {
            record_size: schema.record_size(),
            claim,
            schema,
            overwrite,
            saved: buffer.len(),
            buffer,
            saved_at: Instant::now(),
            restart,
            full,
            last_age_kyr,
        })
    }

    /// Takes a record, and the states of the components at its younger end. Every 64th record
    /// makes a segment, and so does the first after a minute.
    ///
    /// # Errors
    /// If record or state do not fit the file (the record is then not taken), or a segment cannot
    /// be written (the next call tries again; nothing is lost).
    pub fn push(&mut self, record: &Record, restart: &[(String, Vec<f64>)]) -> Result<()> {
        if let Err(problem) = self.check_record(record) {
            return Err(OutputError::Record {
                path: self.claim.path().to_owned(),
                record: self.records(),
                problem,
            });
        }
        self.check_restart(restart)?;
        if self.buffer.len() == CHUNK {
            self.save()?; // Only after an earlier attempt failed.
        }
        self.restart = restart.to_vec();
        self.last_age_kyr = Some(record.age_kyr);
        self.buffer.push(record.clone());
        if self.buffer.len() == CHUNK || self.saved_at.elapsed() >= SAVE_AFTER {
            self.save()
        } else {
            Ok(())
        }
    }

    /// Writes the records that are in no segment yet into one, so that the run can go on later.
    ///
    /// # Errors
    /// If the segment cannot be written; the records are kept, and the next call tries again.
    pub fn save(&mut self) -> Result<()> {
        if self.saved < self.buffer.len() {
            let path = self.claim.path();
            let temporary = segments::temporary(path, self.full);
            let written = Layout::create(&temporary, &self.schema).and_then(|layout| {
                layout.write(0, &Block::gather(&self.schema, &self.buffer))?;
                layout.finish(&self.restart)?;
                segments::seal(&temporary, &segments::path(path, self.full))
            });
            segments::clearing(&temporary, written)?;
            self.saved = self.buffer.len();
        }
        self.saved_at = Instant::now();
        if self.buffer.len() == CHUNK {
            self.full += 1;
            self.buffer.clear();
            self.saved = 0;
        }
        Ok(())
    }

    /// Writes the remaining records, merges all segments into the output and deletes them.
    ///
    /// # Errors
    /// If there is no record, the output has come into being meanwhile and may not be
    /// overwritten, or anything cannot be written. Segments then stay.
    pub fn finish(mut self) -> Result<PathBuf> {
        self.save()?;
        let path = self.claim.path().to_owned();
        if self.segments() == 0 {
            return Err(OutputError::Empty { path });
        }
        let temporary = segments::merging(&path);
        let merged = self.merge(&temporary).and_then(|()| {
            self.claim.refuse_output(self.overwrite)?;
            segments::seal(&temporary, &path)
        });
        segments::clearing(&temporary, merged)?;
        let files: Vec<_> = (0..self.segments())
            .rev()
            .map(|n| segments::path(&path, n))
            .collect();
        segments::remove(&files)?;
        Ok(path)
    }

    /// Number of segments on disk.
    pub fn segments(&self) -> usize {
        self.full + usize::from(self.saved > 0)
    }

    /// Number of records taken so far, those of an earlier part of the run included.
    pub fn records(&self) -> usize {
        self.full * CHUNK + self.buffer.len()
    }

    /// State after the last record.
    pub fn restart(&self) -> &[(String, Vec<f64>)] {
        &self.restart
    }

    fn merge(&self, temporary: &Path) -> Result<()> {
        let layout = Layout::create(temporary, &self.schema)?;
        let mut restart = Restart::new();
        let mut last_kyr = f64::INFINITY;
        for number in 0..self.segments() {
            let segment = RunFile::open(&segments::path(self.claim.path(), number))?;
            let block = segment.block(&self.schema)?;
            if block.age.len() != CHUNK && number + 1 < self.segments() {
                return Err(OutputError::Shape {
                    path: segment.path().to_owned(),
                    variable: AGE.to_owned(),
                    shape: vec![block.age.len()],
                    needed: "a full segment of 64 records",
                });
            }
            for &age in &block.age {
                if age >= last_kyr {
                    let problem = format!("age {age} kyr follows {last_kyr}; ages must fall");
                    return Err(OutputError::Layout {
                        path: segment.path().to_owned(),
                        item: AGE.to_owned(),
                        problem,
                    });
                }
                last_kyr = age;
            }
            layout.write(number * CHUNK, &block)?;
            if number + 1 == self.segments() {
                restart = segment.restart()?;
            }
        }
        layout.finish(&restart)
    }

    fn check_record(&self, record: &Record) -> std::result::Result<(), String> {
        let [older, younger] = record.age_bounds_kyr;
        let age = record.age_kyr;
        // Written so that NaN fails.
        if !(older >= age && age >= younger && older.is_finite() && younger.is_finite()) {
            return Err(format!(
                "age {age} kyr is not between its bounds {older} and {younger}"
            ));
        }
        if let Some(last) = self.last_age_kyr.filter(|last| *last <= age) {
            return Err(format!(
                "age {age} kyr follows {last}; ages must fall, as time goes on"
            ));
        }
        let (given, needed) = (record.values.len(), self.record_size);
        if given != needed {
            return Err(format!("{given} values given, the variables need {needed}"));
        }
        let mut rest = record.values.as_slice();
        for variable in &self.schema.variables {
            let (own, others) = rest.split_at(self.schema.size(variable));
            let stored_as_f32 = !variable.axes.is_empty();
            let too_large =
                |v: &&f64| v.is_infinite() || (stored_as_f32 && narrow(**v).is_infinite());
            if let Some(value) = own.iter().find(too_large) {
                let name = variable.name;
                return Err(format!(
                    "`{name}` is {value} at {age:.3} kyr before 1950, too large to store; the run diverged"
                ));
            }
            rest = others;
        }
        Ok(())
    }

    fn check_restart(&self, restart: &[(String, Vec<f64>)]) -> Result<()> {
        for (i, (component, state)) in restart.iter().enumerate() {
            let problem = if check::name("restart", component).is_err() {
                "the name must begin with a letter and hold letters, digits and underscores only"
            } else if state.is_empty() {
                "the state is empty; leave components without state out"
            } else if restart[..i].iter().any(|(other, _)| other == component) {
                "the component is given twice"
            } else {
                continue;
            };
            let (path, component) = (self.claim.path().to_owned(), component.clone());
            return Err(OutputError::Restart {
                path,
                component,
                problem,
            });
        }
        Ok(())
    }
}
