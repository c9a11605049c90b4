//! `orbicline describe`: what a file says about itself, within 100 columns.

use super::CliError;
use crate::config::difference::Difference;
use crate::config::provenance::{COMMIT, VERSION};
use crate::experiment::describe::{self, Description, Part};
use crate::output::reader::StoredVariable;
use clap::Args;
use std::fmt::Write as _;
use std::io::Write as _;
use std::path::PathBuf;

/// Width of the print.
const WIDTH: usize = 100;
/// Width of the words at the left.
const LABEL: usize = 13;
/// How many of the largest variables are listed.
const LISTED: usize = 6;
/// Longest value of a key that is printed whole.
const LONGEST_VALUE: usize = 160;

/// Arguments of `orbicline describe`.
#[derive(Debug, Args)]
#[command(after_help = "\
Examples:
  What a file is, what made it, and how it differs from the reference configuration:
    orbicline describe out/last_million_years.nc
  The same for a segment of a run that is not complete:
    orbicline describe out/last_million_years.nc.seg0003.nc

Every number of the file is read once, so damage shows. Exit status: 0 described, 1 no readable
run file.")]
pub(super) struct DescribeArguments {
    /// File of a run, or a segment of one
    file: PathBuf,
}

pub(super) fn run(arguments: &DescribeArguments) -> Result<(), CliError> {
    let description = describe::describe(&arguments.file)?;
    let text = Page::of(&description);
    Ok(std::io::stdout().lock().write_all(text.as_bytes())?)
}

/// The text, line by line.
struct Page(String);

impl Page {
    fn of(d: &Description) -> String {
        let mut page = Self(String::new());
        page.paragraph(0, 0, &d.path.display().to_string());
        page.paragraph(0, 0, &d.title);
        page.empty();
        page.run(d);
        page.empty();
        page.origin(d);
        page.empty();
        page.differences(&d.differences);
        page.empty();
        page.forcing(d);
        page.empty();
        page.heat(d);
        page.restart(d);
        page.empty();
        page.sizes(d);
        page.0
    }

    fn run(&mut self, d: &Description) {
        let span = &d.span;
        let [old, young] = span.ages_kyr;
        let (count, years) = (span.records, span.record_yr);
        let what = match span.part {
            Part::Complete => format!("complete: all {count} records of {years:.0} years"),
            Part::Segment { first, of } => format!(
                "not complete: records {first} to {} of {of}, each of {years:.0} years",
                first + count.saturating_sub(1)
            ),
            Part::Unknown => format!(
                "{count} records of {years:.0} years; whether these are all is not known: the \
                 times of its configuration are not understood"
            ),
        };
        self.item("records", &what);
        self.item("ages", &format!("{old:.3} to {young:.3} kyr before 1950"));
        self.item(
            "M",
            &format!(
                "{} (years of orbit and ocean column per seasonal year)",
                d.slow_years
            ),
        );
        let [bands, steps] = d
            .grid
            .each_ref()
            .map(|n| n.as_deref().unwrap_or("(unknown)"));
        self.item("grid", &format!("{bands} bands, {steps} steps a year"));
        self.item("components", &d.components.join(", "));
    }

    fn origin(&mut self, d: &Description) {
        let origin = &d.origin;
        let this = if origin.is_this_program() {
            "this program".to_owned()
        } else {
            format!("this program is {VERSION} ({COMMIT})")
        };
        self.item(
            "program",
            &format!("Orbicline {} ({}); {this}", origin.version, origin.commit),
        );
        for (n, command) in origin.commands.iter().enumerate() {
            self.item(if n == 0 { "commands" } else { "" }, command);
        }
        self.item(
            "SHA-256",
            &format!("{} (configuration, data)", origin.sha256),
        );
        if origin.sha256 != origin.stored_sha256 {
            self.item(
                "",
                "WARNING: the file gives another one, so its attributes were changed afterwards:",
            );
            self.item("", &origin.stored_sha256);
        }
        for (n, (hash, path)) in origin.inputs.iter().enumerate() {
            self.item(if n == 0 { "read" } else { "" }, path);
            self.item("", hash);
        }
    }

    fn differences(&mut self, differences: &[Difference]) {
        let count = match differences.len() {
            0 => "No key differs".to_owned(),
            1 => "One key differs".to_owned(),
            n => format!("{n} keys differ"),
        };
        self.paragraph(
            0,
            0,
            &format!("{count} from the reference configuration of this program:"),
        );
        for d in differences {
            let text = format!(
                "{}: {} -> {}",
                d.key,
                value(d.first.as_deref()),
                value(d.second.as_deref())
            );
            self.paragraph(2, 6, &text);
        }
    }

    fn forcing(&mut self, d: &Description) {
        self.paragraph(0, 0, "Orbit and carbon dioxide: range in the file, source");
        for forcing in &d.forcing {
            let [low, high] = forcing.range.map(|v| format!("{v:.*}", forcing.digits));
            let range = format!("{low} to {high} {}", forcing.unit);
            let source = forcing.source.as_deref().unwrap_or_default();
            let text = format!("{:<20} {range:<24} {source}", forcing.name);
            self.paragraph(2, 48, &text);
        }
    }

    fn heat(&mut self, d: &Description) {
        let text = match &d.heat {
            Some(heat) => format!(
                "largest residual {:.1e} of the sunlight absorbed; at the end {:+.1e} J, while the \
                 heat of the planet changed by {:+.2e} J since the first year",
                heat.largest_relative, heat.last_j, heat.change_j
            ),
            None => "the file has no heat ledger".to_owned(),
        };
        self.item("heat ledger", &text);
    }

    fn restart(&mut self, d: &Description) {
        let parts: Vec<_> = d
            .restart
            .iter()
            .map(|(name, length)| format!("{name} {length}"))
            .collect();
        let text = if parts.is_empty() {
            "none".to_owned()
        } else {
            let all: usize = d.restart.iter().map(|(_, length)| length).sum();
            format!("{all} numbers to go on from: {}", parts.join(", "))
        };
        self.item("state", &text);
    }

    fn sizes(&mut self, d: &Description) {
        let sum = |size: fn(&StoredVariable) -> u64| d.variables.iter().map(size).sum::<u64>();
        let (raw, stored) = (sum(|v| v.raw_bytes), sum(|v| v.stored_bytes));
        self.item(
            "size",
            &format!(
                "{}; values {}, {} before compression ({:.1} times)",
                bytes(d.file_bytes),
                bytes(stored),
                bytes(raw),
                raw as f64 / stored.max(1) as f64
            ),
        );
        let dimensions: Vec<_> = dimensions(&d.variables)
            .iter()
            .map(|(name, length)| format!("{name} {length}"))
            .collect();
        self.item("dimensions", &dimensions.join(", "));
        let mut largest: Vec<_> = d.variables.iter().collect();
        largest.sort_by_key(|v| std::cmp::Reverse(v.stored_bytes));
        for (n, v) in largest.iter().take(LISTED).enumerate() {
            let text = format!(
                "{:<46} {:>9}  {:>3.0} %",
                format!("{}({})", v.name, v.dimensions.join(", ")),
                bytes(v.stored_bytes),
                100.0 * v.stored_bytes as f64 / d.file_bytes.max(1) as f64
            );
            self.item(if n == 0 { "largest" } else { "" }, &text);
        }
    }

    fn empty(&mut self) {
        self.0.push('\n');
    }

    /// A word at the left, then a text beside it.
    fn item(&mut self, label: &str, text: &str) {
        self.paragraph(0, LABEL, &format!("{label:<LABEL$}{text}"));
    }

    /// A text, its first line and the others indented; broken at blanks. Words longer than a line,
    /// such as paths, are left whole so that they can be copied. What controls a terminal is not
    /// passed on.
    fn paragraph(&mut self, first: usize, others: usize, text: &str) {
        let clean = |c: char| if c.is_control() { '\u{fffd}' } else { c };
        let text: String = text.trim_end().chars().map(clean).collect();
        let mut line = " ".repeat(first);
        let mut width = first;
        let mut fresh = true;
        for word in text.split(' ') {
            let length = word.chars().count();
            if !fresh && !word.is_empty() && width + 1 + length > WIDTH {
                self.line(&line);
                line = " ".repeat(others);
                width = others;
                fresh = true;
            }
            if !fresh {
                line.push(' ');
                width += 1;
            }
            line.push_str(word);
            width += length;
            fresh = false;
        }
        self.line(&line);
    }

    fn line(&mut self, line: &str) {
        // Writing to a string cannot fail.
        let _ = writeln!(self.0, "{}", line.trim_end());
    }
}

/// The value of a key; long lists are cut.
fn value(value: Option<&str>) -> String {
    let Some(text) = value else {
        return "(not there)".to_owned();
    };
    let length = text.chars().count();
    if length <= LONGEST_VALUE {
        return text.to_owned();
    }
    let start: String = text.chars().take(LONGEST_VALUE).collect();
    format!("{start} ... ({length} characters)")
}

fn bytes(count: u64) -> String {
    match count {
        0..10_000 => format!("{count} B"),
        10_000..10_000_000 => format!("{:.1} kB", count as f64 / 1e3),
        _ => format!("{:.1} MB", count as f64 / 1e6),
    }
}

/// Names and lengths of the dimensions, in the order in which variables use them.
fn dimensions(variables: &[StoredVariable]) -> Vec<(&str, usize)> {
    let mut found: Vec<(&str, usize)> = Vec::new();
    for variable in variables {
        for (name, &length) in variable.dimensions.iter().zip(&variable.shape) {
            if !found.iter().any(|(known, _)| known == name) {
                found.push((name, length));
            }
        }
    }
    found
}
