//! Where a result comes from: program version, commit, command line, and the files read.
//!
//! Rule: nothing here depends on the clock or the machine, so that the same command on the same
//! inputs writes the same file.

use sha2::{Digest, Sha256};
use std::fmt::Write as _;
use std::path::{Path, PathBuf};

/// Version of the program.
pub const VERSION: &str = env!("CARGO_PKG_VERSION");
/// Commit that the program was built from, with `-dirty` if files had changed; or `unknown`.
pub const COMMIT: &str = env!("ORBICLINE_GIT_COMMIT");

/// A file that was read, and what was in it.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct InputFile {
    /// The file, as it was named.
    pub path: PathBuf,
    /// SHA-256 of its bytes, in hexadecimal.
    pub sha256: String,
}

impl InputFile {
    /// Notes a file that was read.
    pub fn new(path: &Path, bytes: &[u8]) -> Self {
        let sha256 = Sha256::digest(bytes)
            .iter()
            .fold(String::new(), |mut text, byte| {
                // Writing to a string cannot fail.
                let _ = write!(text, "{byte:02x}");
                text
            });
        Self {
            path: path.to_owned(),
            sha256,
        }
    }
}

/// All that is needed to make a result again.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Provenance {
    /// The command, with its arguments quoted for a shell.
    pub command_line: String,
    /// Files read, configuration and data.
    pub inputs: Vec<InputFile>,
}

impl Provenance {
    /// From the arguments of the command, the program's name first, and the files read.
    pub fn new(arguments: &[String], inputs: &[InputFile]) -> Self {
        let words: Vec<_> = arguments.iter().map(|word| quoted(word)).collect();
        Self {
            command_line: words.join(" "),
            inputs: inputs.to_vec(),
        }
    }

    /// Names and texts, to be written as attributes of the output.
    pub fn attributes(&self) -> Vec<(String, String)> {
        let files: Vec<_> = self
            .inputs
            .iter()
            .map(|file| format!("{}  {}", file.sha256, file.path.display()))
            .collect();
        [
            ("source", format!("Orbicline {VERSION}")),
            ("orbicline_version", VERSION.to_owned()),
            ("orbicline_commit", COMMIT.to_owned()),
            ("command_line", self.command_line.clone()),
            ("input_sha256", files.join("\n")),
        ]
        .map(|(name, text)| (name.to_owned(), text))
        .to_vec()
    }
}

/// A word as a shell would need it.
fn quoted(word: &str) -> String {
    let plain = |c: char| c.is_ascii_alphanumeric() || "-_./=:,+@%".contains(c);
    if !word.is_empty() && word.chars().all(plain) {
        word.to_owned()
    } else {
        format!("'{}'", word.replace('\'', r"'\''"))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn hash_is_sha256() {
        // FIPS 180-4 example: SHA-256 of "abc".
        let file = InputFile::new(Path::new("a"), b"abc");
        let expected = "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad";
        assert_eq!(file.sha256, expected);
    }

    #[test]
    fn attributes_name_command_and_inputs() {
        let words = ["orbicline", "run", "a b.toml", "it's", ""].map(str::to_owned);
        let provenance = Provenance::new(&words, &[InputFile::new(Path::new("x.toml"), b"")]);
        let attributes = provenance.attributes();
        let text = |name: &str| {
            let found = attributes.iter().find(|(key, _)| key == name);
            found.map(|(_, text)| text.as_str()).unwrap()
        };
        assert_eq!(
            text("command_line"),
            r"orbicline run 'a b.toml' 'it'\''s' ''"
        );
        assert!(text("input_sha256").ends_with("  x.toml"));
        assert_eq!(text("orbicline_version"), VERSION);
        assert!(!text("orbicline_commit").is_empty());
    }
}
