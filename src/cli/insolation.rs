//! `orbicline insolation`: insolation against age, latitude and season.

use super::CliError;
use super::lists::{Dates, Longitudes, Numbers, dates, longitude, longitudes, numbers};
use super::orbit_choice::{SolutionName, choice};
use super::table::Destination;
use crate::experiment::ages::AgeRange;
use crate::experiment::insolation::{self, Moments, MonthKind, Quantity, Request};
use clap::{ArgGroup, Args, Subcommand, ValueEnum};
use std::path::PathBuf;

/// Arguments of `orbicline insolation`.
#[derive(Debug, Args)]
#[command(after_help = "\
Examples:
  65N at the June solstice over the last million years, as text on the terminal:
    orbicline insolation daily --latitude 65 --sun-longitude june-solstice \\
        --from-kyr 1000 --to-kyr 0 --step-kyr 1
  Every month and latitude 127 kyr before 1950 against today, as a NetCDF file:
    orbicline insolation monthly --latitude -90:90:5 --at-kyr 127 --against-kyr 0 --out lig.nc
  The same as a figure (or .png):
    orbicline insolation monthly --latitude -90:90:5 --at-kyr 127 --against-kyr 0 --out lig.svg
  Caloric half-years of both 65th parallels:
    orbicline insolation caloric --latitude -65,65 --from-kyr 800 --to-kyr 0 --step-kyr 1
  From the March to the September equinox, with the orbit of an experiment:
    orbicline insolation season --from-longitude 0 --to-longitude 180 --latitude 65 \\
        --config configs/obliquity_only.toml --from-kyr 100 --to-kyr 0 --step-kyr 1")]
pub(super) struct InsolationArguments {
    #[command(subcommand)]
    command: QuantityCommand,
}

#[derive(Debug, Subcommand)]
enum QuantityCommand {
    /// Daily means at longitudes of the Sun or on dates
    Daily(DailyArguments),
    /// Means and lengths of the twelve months
    Monthly(MonthlyArguments),
    /// Means of the caloric half-years: the half of the year with the most sunlight, and the other
    Caloric(CommonArguments),
    /// Mean, energy and length of the time between two longitudes of the Sun
    Season(SeasonArguments),
    /// Annual means
    Annual(CommonArguments),
}

/// What all quantities need.
#[derive(Debug, Args)]
#[command(group = ArgGroup::new("origin"))]
struct CommonArguments {
    /// Latitudes, degrees north: 65 or 65,0,-65 or -90:90:5 (from:to:step)
    #[arg(long, value_name = "LIST", allow_hyphen_values = true, value_parser = numbers)]
    latitude: Numbers,
    /// One age, kyr before 1950
    #[arg(long, value_name = "AGE", allow_negative_numbers = true,
        conflicts_with_all = ["from_kyr", "to_kyr", "step_kyr"])]
    at_kyr: Option<f64>,
    /// Oldest age, kyr before 1950
    #[arg(
        long,
        value_name = "AGE",
        allow_negative_numbers = true,
        required_unless_present = "at_kyr"
    )]
    from_kyr: Option<f64>,
    /// Youngest age, kyr before 1950; negative after 1950
    #[arg(
        long,
        value_name = "AGE",
        allow_negative_numbers = true,
        required_unless_present = "at_kyr"
    )]
    to_kyr: Option<f64>,
    /// Distance between two ages, kyr
    #[arg(
        long,
        value_name = "KYR",
        allow_negative_numbers = true,
        required_unless_present = "at_kyr"
    )]
    step_kyr: Option<f64>,
    /// Give differences from the insolation of this age, kyr before 1950
    #[arg(long, value_name = "AGE", allow_negative_numbers = true)]
    against_kyr: Option<f64>,
    /// Orbital solution [default: integrated]
    #[arg(long, value_name = "NAME", group = "origin")]
    solution: Option<SolutionName>,
    /// Orbit, solar constant and equinox as a configuration describes them
    #[arg(long, value_name = "FILE", group = "origin")]
    config: Option<PathBuf>,
    /// Change one key of the configuration
    #[arg(long, value_name = "KEY=VALUE", requires = "config")]
    set: Vec<String>,
    /// Solar constant, W m-2 at one semi-major axis [default: 1361, or that of the configuration]
    #[arg(long, value_name = "VALUE", allow_negative_numbers = true)]
    solar_constant_w_m2: Option<f64>,
    #[command(flatten)]
    destination: Destination,
}

#[derive(Debug, Args)]
#[command(group = ArgGroup::new("moments").required(true))]
struct DailyArguments {
    /// True longitudes of the Sun, degrees from the March equinox: 90 or 0:360:10 or june-solstice
    #[arg(long, value_name = "LIST", group = "moments", value_parser = longitudes)]
    sun_longitude: Option<Longitudes>,
    /// Dates of the 365-day calendar, month-day: 06-21 or 03-21,06-21
    #[arg(long, value_name = "LIST", group = "moments", value_parser = dates)]
    date: Option<Dates>,
    #[command(flatten)]
    equinox: EquinoxArguments,
    #[command(flatten)]
    common: CommonArguments,
}

#[derive(Debug, Args)]
struct EquinoxArguments {
    /// March equinox, days since 1 January 0 h of the 365-day calendar
    /// [default: 79.5 (21 March noon), or that of the configuration]
    #[arg(long, value_name = "DAY", allow_negative_numbers = true)]
    equinox_day: Option<f64>,
}

#[derive(Debug, Args)]
struct MonthlyArguments {
    /// Months of fixed length, or of the seasons (fixed angle) that they have in 1950
    /// [default: fixed-length, or those of the configuration]
    #[arg(long, value_name = "KIND")]
    months: Option<MonthName>,
    #[command(flatten)]
    equinox: EquinoxArguments,
    #[command(flatten)]
    common: CommonArguments,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
enum MonthName {
    FixedLength,
    FixedAngle,
}

#[derive(Debug, Args)]
struct SeasonArguments {
    /// Longitude of the Sun at the beginning, degrees or a name such as march-equinox
    #[arg(long, value_name = "DEGREES", allow_hyphen_values = true, value_parser = longitude)]
    from_longitude: f64,
    /// Longitude of the Sun at the end, in the order of the year
    #[arg(long, value_name = "DEGREES", allow_hyphen_values = true, value_parser = longitude)]
    to_longitude: f64,
    #[command(flatten)]
    common: CommonArguments,
}

impl QuantityCommand {
    fn quantity(&self) -> Quantity {
        match self {
            Self::Daily(daily) => Quantity::Daily(match (&daily.sun_longitude, &daily.date) {
                (Some(Longitudes(list)), _) => Moments::SunLongitudes(list.clone()),
                (None, Some(Dates(days))) => Moments::Dates(days.clone()),
                // One of them is required.
                (None, None) => Moments::Dates(Vec::new()),
            }),
            Self::Monthly(_) => Quantity::Monthly,
            Self::Caloric(_) => Quantity::Caloric,
            Self::Season(season) => Quantity::Season([season.from_longitude, season.to_longitude]),
            Self::Annual(_) => Quantity::Annual,
        }
    }

    fn common(&self) -> &CommonArguments {
        match self {
            Self::Daily(daily) => &daily.common,
            Self::Monthly(monthly) => &monthly.common,
            Self::Season(season) => &season.common,
            Self::Caloric(common) | Self::Annual(common) => common,
        }
    }

    fn months(&self) -> Option<MonthKind> {
        match self {
            Self::Monthly(monthly) => monthly.months.map(|name| match name {
                MonthName::FixedLength => MonthKind::FixedLength,
                MonthName::FixedAngle => MonthKind::FixedAngle,
            }),
            _ => None,
        }
    }

    fn equinox_day(&self) -> Option<f64> {
        match self {
            Self::Daily(daily) => daily.equinox.equinox_day,
            Self::Monthly(monthly) => monthly.equinox.equinox_day,
            _ => None,
        }
    }
}

impl CommonArguments {
    fn ages(&self) -> AgeRange {
        match (self.at_kyr, self.from_kyr, self.to_kyr, self.step_kyr) {
            (None, Some(from_kyr), Some(to_kyr), Some(step_kyr)) => AgeRange {
                from_kyr,
                to_kyr,
                step_kyr,
            },
            (age_kyr, ..) => AgeRange::one(age_kyr.unwrap_or_default()),
        }
    }
}

pub(super) fn run(arguments: &InsolationArguments, words: &[String]) -> Result<(), CliError> {
    let command = &arguments.command;
    let common = command.common();
    let request = Request {
        orbit: choice(common.solution, common.config.as_deref(), &common.set),
        ages: common.ages(),
        against_kyr: common.against_kyr,
        latitudes_deg: common.latitude.0.clone(),
        quantity: command.quantity(),
        solar_constant_w_m2: common.solar_constant_w_m2,
        months: command.months(),
        equinox_day: command.equinox_day(),
    };
    let table = || Ok(insolation::tabulate(&request, words)?);
    common.destination.fill(table, insolation::draw)
}
