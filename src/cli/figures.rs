//! The key figures of a finished run, as a table.

use crate::experiment::summary::{KeyFigure, Summary};
use std::io::Write;
use std::path::Path;

/// The path, the key figures, and how to open the file.
pub(super) fn print(file: &Path, summary: &Summary) -> Result<(), std::io::Error> {
    let mut out = std::io::stdout().lock();
    let [old, young] = summary.ages_kyr;
    let [least, most] = summary.co2_ppm;
    let records = if summary.records == 1 {
        "record"
    } else {
        "records"
    };
    writeln!(out, "{}", file.display())?;
    writeln!(
        out,
        "{} {records}, {old:.3} to {young:.3} kyr before 1950; carbon dioxide {least:.0} to {most:.0} ppm",
        summary.records
    )?;
    writeln!(
        out,
        "M = {} (years of orbit and ocean column per seasonal year)",
        summary.slow_years
    )?;
    writeln!(
        out,
        "heat: largest residual {:.1e} of the sunlight absorbed",
        summary.heat_residual
    )?;
    writeln!(out)?;
    row(
        &mut out,
        ["", "mean", "range", "per degree", "Dec to June", ""],
    )?;
    row(&mut out, ["", "", "", "of tilt*", "perihelion*", ""])?;
    for figure in &summary.figures {
        line(&mut out, figure)?;
    }
    writeln!(
        out,
        "* slopes of a least-squares fit on tilt, precession (at eccentricity 0.05) and eccentricity;"
    )?;
    writeln!(
        out,
        "  told for runs of two tilt cycles or more with constant carbon dioxide"
    )?;
    writeln!(out)?;
    writeln!(out, "Open it in Python:")?;
    writeln!(out, "  import xarray")?;
    writeln!(
        out,
        "  run = xarray.open_dataset({:?})",
        file.display().to_string()
    )
}

/// The file was complete before.
pub(super) fn already(file: &Path) -> Result<(), std::io::Error> {
    let text = "is complete already; nothing was run";
    writeln!(std::io::stdout(), "{} {text}", file.display())
}

fn line(out: &mut impl Write, figure: &KeyFigure) -> Result<(), std::io::Error> {
    let signed = |value: Option<f64>| value.map_or_else(|| "-".to_owned(), |v| format!("{v:+.3}"));
    let [low, high] = figure.range;
    let (mean, range) = if figure.mean.is_finite() {
        (
            format!("{:.3}", figure.mean),
            format!("{low:.3} to {high:.3}"),
        )
    } else {
        ("none".to_owned(), "-".to_owned())
    };
    let (tilt, perihelion) = (
        signed(figure.per_degree_tilt),
        signed(figure.december_to_june),
    );
    row(
        out,
        [figure.name, &mean, &range, &tilt, &perihelion, figure.unit],
    )
}

fn row(out: &mut impl Write, cells: [&str; 6]) -> Result<(), std::io::Error> {
    let [name, mean, range, tilt, perihelion, unit] = cells;
    let text = format!("{name:<33} {mean:>9} {range:>21} {tilt:>11} {perihelion:>12}  {unit}");
    writeln!(out, "{}", text.trim_end())
}
