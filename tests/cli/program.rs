//! Runs the program in a folder of its own.

use std::path::{Path, PathBuf};
use std::process::{Command, Output};

/// 140 years in 70 records, more than the 64 of a segment, with little spin-up; `REFERENCE` stands for
/// the path of the reference configuration.
pub(crate) const SHORT: &str = "extends = \"REFERENCE\"
title = \"A short run\"
[time]
start_kyr = 10.14
end_kyr = 10.0
record_every_yr = 2
[time.spin_up]
seasonal_yr = 5
settling_yr = 5";

/// What a call came to.
#[derive(Debug)]
pub(crate) struct Outcome {
    pub(crate) ok: bool,
    /// Exit status; none when a signal ended it.
    pub(crate) code: Option<i32>,
    pub(crate) out: String,
    pub(crate) err: String,
}

impl Outcome {
    /// Asserts that it failed of itself, with nothing but a message that holds all fragments.
    pub(crate) fn says(&self, fragments: &[&str]) {
        let failed = matches!(self.code, Some(1 | 2));
        assert!(failed, "{self:?}");
        self.tells(fragments);
    }

    /// Asserts that it printed nothing but a message that holds all fragments.
    pub(crate) fn tells(&self, fragments: &[&str]) {
        assert!(self.out.is_empty(), "{self:?}");
        for fragment in fragments {
            assert!(
                self.err.contains(fragment),
                "`{fragment}` is not in\n{}",
                self.err
            );
        }
        assert!(!self.err.contains("panicked"), "{}", self.err);
    }
}

/// A folder with `short.toml` in it.
pub(crate) struct Folder(tempfile::TempDir);

impl Folder {
    pub(crate) fn new() -> Self {
        let folder = Self(tempfile::tempdir().expect("a folder"));
        folder.write("short.toml", SHORT);
        folder
    }

    pub(crate) fn path(&self, name: &str) -> PathBuf {
        self.0.path().join(name)
    }

    /// Writes a file; `REFERENCE` becomes the path of the reference configuration.
    pub(crate) fn write(&self, name: &str, text: &str) {
        let reference = Path::new(env!("CARGO_MANIFEST_DIR")).join("configs/reference.toml");
        let text = text.replace("REFERENCE", &reference.display().to_string());
        std::fs::write(self.path(name), text).expect("a file");
    }

    pub(crate) fn read(&self, name: &str) -> Vec<u8> {
        std::fs::read(self.path(name)).expect("a file")
    }

    /// Names of all files, sorted.
    pub(crate) fn files(&self) -> Vec<String> {
        self.files_in("")
    }

    /// Names of all files in a folder within, sorted; logs are left out.
    pub(crate) fn files_in(&self, name: &str) -> Vec<String> {
        let entries = std::fs::read_dir(self.path(name)).expect("a folder");
        let name = |e: std::io::Result<std::fs::DirEntry>| e.expect("an entry").file_name();
        let mut names: Vec<_> = entries
            .map(|e| name(e).to_string_lossy().into_owned())
            .filter(|n| !n.ends_with("nc.log"))
            .collect();
        names.sort();
        names
    }

    /// The program, ready to be started in this folder.
    pub(crate) fn command(&self, words: &[&str]) -> Command {
        let mut command = Command::new(env!("CARGO_BIN_EXE_orbicline"));
        command.args(words).current_dir(self.0.path());
        command
    }

    pub(crate) fn orbicline(&self, words: &[&str]) -> Outcome {
        Outcome::of(&self.command(words).output().expect("a program"))
    }
}

impl Outcome {
    pub(crate) fn of(output: &Output) -> Self {
        let text = |bytes: &[u8]| String::from_utf8(bytes.to_vec()).expect("UTF-8");
        Self {
            ok: output.status.success(),
            code: output.status.code(),
            out: text(&output.stdout),
            err: text(&output.stderr),
        }
    }
}
