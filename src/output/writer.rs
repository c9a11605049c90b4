//! Takes the records of a run and makes its file, so that a killed run keeps what it had.
//!
//! Format facts: 64 records fill a chunk and make a segment (see `segments`); the merged file
//! holds the records of all segments, in chunks of 64, and the last restart state. Merging reads
//! one segment at a time, so memory does not grow with the run.
//!
//! Rules: an existing output, or segments of an unfinished run beside it, are refused unless
//! overwriting is allowed. Allowed, segments are deleted at the start; an existing output stays
//! until the new one is complete and takes its name.
//!
//! Sources: NetCDF-4 format specification; CF 1.11; POSIX rename.

use std::path::{Path, PathBuf};

use super::error::{OutputError, Result};
use super::layout::{Block, CHUNK, Layout, Restart};
use super::netcdf4::narrow;
use super::reader::RunFile;
use super::schema::{AGE, Schema, check};
use super::segments;
use crate::series::Record;

#[cfg(test)]
mod tests;

/// What to do with an output that exists already.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Overwrite {
    /// Report it as an error.
    Refuse,
    /// Replace it, and delete segments of an unfinished run.
    Replace,
}

/// Writes one run. Dropped without [`RunWriter::finish`], it leaves its segments behind.
#[derive(Debug)]
pub struct RunWriter {
    path: PathBuf,
    schema: Schema,
    overwrite: Overwrite,
    record_size: usize,
    /// Records since the last segment; those of a full segment stay until the next record.
    buffer: Vec<Record>,
    /// Whether the buffer holds records that are in no segment yet.
    unsaved: bool,
    restart: Restart,
    segments: usize,
    /// Keeps other runs away from this output for as long as the writer lives.
    _lock: segments::Lock,
}

impl RunWriter {
    /// Checks table and folder, and makes the folder if it is missing.
    ///
    /// # Errors
    /// If the table is unsound, the output or segments exist and may not be overwritten, or the
    /// folder cannot be written to.
    pub fn create(path: &Path, schema: Schema, overwrite: Overwrite) -> Result<Self> {
        schema.check()?;
        segments::prepare(path)?;
        let lock = segments::lock(path)?;
        refuse_existing(path, overwrite)?;
        let stale = segments::leftovers(path)?;
        if let (Some(first), Overwrite::Refuse) = (stale.first(), overwrite) {
            return Err(OutputError::StaleSegments {
                path: path.to_owned(),
                count: stale.len(),
                first: first.clone(),
            });
        }
        segments::remove(&stale)?;
        let record_size = schema.record_size();
        Ok(Self {
            path: path.to_owned(),
            schema,
            overwrite,
            record_size,
            buffer: Vec::with_capacity(CHUNK),
            unsaved: false,
            restart: Restart::new(),
            segments: 0,
            _lock: lock,
        })
    }

    /// Takes a record, and the states of the components at its younger end. Every 64th record
    /// makes a segment.
    ///
    /// # Errors
    /// If record or state do not fit the file (the record is then not taken), or a segment cannot
    /// be written (the next call tries again; nothing is lost).
    pub fn push(&mut self, record: &Record, restart: &[(String, Vec<f64>)]) -> Result<()> {
        if let Err(problem) = self.check_record(record) {
            let number = self.taken();
            return Err(OutputError::Record {
                path: self.path.clone(),
                record: number,
                problem,
            });
        }
        self.check_restart(restart)?;
        if self.buffer.len() == CHUNK {
            self.write_unsaved()?; // Only after an earlier attempt failed.
            self.buffer.clear();
        }
        self.restart = restart.to_vec();
        self.buffer.push(record.clone());
        self.unsaved = true;
        if self.buffer.len() == CHUNK {
            self.write_unsaved()
        } else {
            Ok(())
        }
    }

    /// Writes the remaining records, merges all segments into the output and deletes them.
    ///
    /// # Errors
    /// If there is no record, the output has come into being meanwhile and may not be
    /// overwritten, or anything cannot be written. Segments then stay.
    pub fn finish(mut self) -> Result<PathBuf> {
        self.write_unsaved()?;
        if self.segments == 0 {
            return Err(OutputError::Empty { path: self.path });
        }
        let temporary = segments::merging(&self.path);
        self.merge(&temporary)?;
        refuse_existing(&self.path, self.overwrite)?;
        segments::seal(&temporary, &self.path)?;
        let files: Vec<_> = (0..self.segments)
            .map(|n| segments::path(&self.path, n))
            .collect();
        segments::remove(&files)?;
        Ok(self.path)
    }

    fn write_unsaved(&mut self) -> Result<()> {
        if !self.unsaved {
            return Ok(());
        }
        let temporary = segments::temporary(&self.path, self.segments);
        let layout = Layout::create(&temporary, &self.schema)?;
        layout.write(0, &Block::gather(&self.schema, &self.buffer))?;
        layout.finish(&self.restart)?;
        segments::seal(&temporary, &segments::path(&self.path, self.segments))?;
        self.segments += 1;
        self.unsaved = false;
        Ok(())
    }

    /// Number of records taken so far.
    fn taken(&self) -> usize {
        self.segments * CHUNK + if self.unsaved { self.buffer.len() } else { 0 }
    }

    fn merge(&self, temporary: &Path) -> Result<()> {
        let layout = Layout::create(temporary, &self.schema)?;
        let mut restart = Restart::new();
        for number in 0..self.segments {
            let segment = RunFile::open(&segments::path(&self.path, number))?;
            let block = segment.block(&self.schema)?;
            if block.age.len() != CHUNK && number + 1 < self.segments {
                return Err(OutputError::Shape {
                    path: segment.path().to_owned(),
                    variable: AGE.to_owned(),
                    shape: vec![block.age.len()],
                    needed: "a full segment of 64 records",
                });
            }
            layout.write(number * CHUNK, &block)?;
            if number + 1 == self.segments {
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
        if let Some(last) = self.buffer.last().filter(|last| last.age_kyr <= age) {
            let last = last.age_kyr;
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
                    "`{name}` is {value}, too large to store; the run diverged"
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
            let (path, component) = (self.path.clone(), component.clone());
            return Err(OutputError::Restart {
                path,
                component,
                problem,
            });
        }
        Ok(())
    }
}

/// Refuses what is no regular file and, unless it may be replaced, what exists.
pub(super) fn refuse_existing(path: &Path, overwrite: Overwrite) -> Result<()> {
    if path.symlink_metadata().is_ok_and(|found| !found.is_file()) {
        return Err(OutputError::BadPath {
            path: path.to_owned(),
            reason: "it is not a regular file (a link or a device); name a file",
        });
    }
    if overwrite == Overwrite::Refuse && path.symlink_metadata().is_ok() {
        return Err(OutputError::Exists {
            path: path.to_owned(),
        });
    }
    Ok(())
}
