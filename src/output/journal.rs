//! The log file beside an output: what was run and what happened, each line with its time (UTC).
//!
//! The log is for people; nothing reads it, and nothing in the results depends on its clock.

use super::error::{OutputError, Result};
use std::fs::{File, OpenOptions};
use std::io::Write;
use std::path::{Path, PathBuf};
use std::time::SystemTime;

/// A log file.
#[derive(Debug)]
pub struct Journal {
    path: PathBuf,
    file: Option<File>,
}

impl Journal {
    /// The log of an output; nothing is written yet.
    pub fn beside(output: &Path) -> Self {
        let mut name = output.as_os_str().to_owned();
        name.push(".log");
        Self {
            path: name.into(),
            file: None,
        }
    }

    /// Opens the file; new lines follow what is there.
    ///
    /// # Errors
    /// When it cannot be opened.
    pub fn open(&mut self) -> Result<()> {
        // A pipe of that name would hold the run until somebody reads it.
        if self.path.symlink_metadata().is_ok_and(|m| !m.is_file()) {
            return Err(OutputError::BadPath {
                path: self.path.clone(),
                reason: "it is not a regular file, so no log is written",
            });
        }
        let opened = OpenOptions::new()
            .append(true)
            .create(true)
            .open(&self.path);
        self.file = Some(opened.map_err(|e| self.trouble(e))?);
        Ok(())
    }

    /// Writes lines, each with the time; nothing before the file is open.
    ///
    /// # Errors
    /// When they cannot be written; nothing is written afterwards.
    pub fn note(&mut self, text: &str) -> Result<()> {
        let Some(file) = &mut self.file else {
            return Ok(());
        };
        let time = humantime::format_rfc3339_seconds(SystemTime::now());
        let lines: Vec<_> = text.lines().map(|line| format!("{time} {line}")).collect();
        let lines = lines.join("\n") + "\n";
        if let Err(error) = file.write_all(lines.as_bytes()) {
            self.file = None;
            return Err(self.trouble(error));
        }
        Ok(())
    }

    fn trouble(&self, source: std::io::Error) -> OutputError {
        OutputError::Io {
            action: "write the log",
            path: self.path.clone(),
            source,
        }
    }
}
