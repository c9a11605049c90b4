//! `orbicline orbit` and `orbicline insolation` as their user meets them: numbers against other
//! people's, files, figures, and what is refused.
#![cfg(feature = "netcdf")]

#[path = "cli/program.rs"]
mod program;

#[path = "insolation_command/figures.rs"]
mod figures;
#[path = "insolation_command/orbit.rs"]
mod orbit;
#[path = "insolation_command/refused.rs"]
mod refused;

use program::{Folder, Outcome};

/// Runs the program with words separated by blanks.
fn run(folder: &Folder, words: &str) -> Outcome {
    folder.orbicline(&words.split_whitespace().collect::<Vec<_>>())
}

/// The rows of a table on standard output by the names of their columns.
struct Rows {
    names: Vec<String>,
    rows: Vec<Vec<String>>,
}

impl Rows {
    fn of(outcome: &Outcome) -> Self {
        assert!(outcome.ok && outcome.err.is_empty(), "{outcome:?}");
        Self::read(&outcome.out)
    }

    fn read(text: &str) -> Self {
        let split = |line: &str| line.split(',').map(str::to_owned).collect::<Vec<_>>();
        let mut lines = text
            .lines()
            .filter(|line| !line.starts_with('#'))
            .map(split);
        let names = lines.next().expect("a line of names");
        Self {
            names,
            rows: lines.collect(),
        }
    }

    fn column(&self, name: &str) -> Vec<f64> {
        let at = self.names.iter().position(|n| n == name);
        let at = at.unwrap_or_else(|| panic!("no {name} among {:?}", self.names));
        let number = |row: &Vec<String>| match row[at].as_str() {
            "" => f64::NAN,
            text => text.parse().expect("a number"),
        };
        self.rows.iter().map(number).collect()
    }
}

/// Numbers of a table kept with the validation cases, up to the first column that holds none.
fn published(text: &str) -> Vec<Vec<f64>> {
    let lines = text
        .lines()
        .filter(|line| !line.starts_with('#') && !line.is_empty());
    let numbers = |line: &str| {
        line.split(',')
            .map_while(|n| n.trim().parse().ok())
            .collect()
    };
    lines.map(numbers).collect()
}

fn close(got: &[f64], expected: &[f64], tolerance: f64) {
    assert_eq!(got.len(), expected.len());
    for (a, b) in got.iter().zip(expected) {
        assert!((a - b).abs() <= tolerance, "{got:?}, expected {expected:?}");
    }
}

/// What most commands here share.
const AT_0: &str = "--solution berger1978 --at-kyr 0";

#[test]
fn published_monthly_table_of_the_present() {
    // PMIP1 documentation appendix, S0 = 1365 W/m2, digits printed to 0.01: tolerance 0.015 W/m2. Its
    // means are of daily values, ours of all moments: 0.05 at the poles, where the sun rises and sets in
    // the middle of a month.
    let folder = Folder::new();
    let words =
        format!("insolation monthly --latitude -90:90:10 {AT_0} --solar-constant-w-m2 1365");
    let rows = Rows::of(&run(&folder, &words));
    let (months, latitudes, means) = (
        rows.column("month"),
        rows.column("latitude_deg"),
        rows.column("insolation_w_m2"),
    );
    let table = published(include_str!("../validation/insolation/pmip1_present.csv"));
    assert_eq!(table.len() * 12, means.len());
    for row in table {
        for (n, expected) in row[1..].iter().enumerate() {
            let here = |i: &usize| {
                (months[*i] - n as f64 - 1.0).abs() < 0.5 && (latitudes[*i] - row[0]).abs() < 0.5
            };
            let found = (0..means.len()).find(here).expect("month and latitude");
            let error = (means[found] - expected).abs();
            let allowed = if row[0].abs() > 89.0 { 0.05 } else { 0.015 };
            assert!(
                error < allowed,
                "{} {}: {} {expected}",
                row[0],
                n + 1,
                means[found]
            );
        }
    }
}

#[test]
fn published_lengths_of_months_of_fixed_angle() {
    // month_lengths.csv (a general library; its equinox is 80.5 days after the beginning of the
    // year), days of a 365-day year; tolerance 0.01 days.
    let folder = Folder::new();
    for row in published(include_str!("../validation/orbit/month_lengths.csv")) {
        // Where the orbit of that table is the series to its last digit.
        if ![6.0, 21.0, 127.0]
            .iter()
            .any(|age| (row[0] - age).abs() < 0.5)
        {
            continue;
        }
        let words = format!(
            "insolation monthly --months fixed-angle --equinox-day 80.5 --latitude 0 \
             --solution berger1978 --at-kyr {}",
            row[0]
        );
        let lengths = Rows::of(&run(&folder, &words)).column("length_day");
        let of_365: Vec<_> = lengths.iter().map(|l| l / 365.2422 * 365.0).collect();
        close(&of_365, &row[1..13], 0.01);
    }
}

#[test]
fn published_caloric_half_years() {
    // Sampled every tenth of a day, 65N, S0 = 1361: 366.051 (1950) and 384.396 (127 ka), 0.1 %.
    let folder = Folder::new();
    let of = |age: &str| {
        let words =
            format!("insolation caloric --latitude 65 --solution berger1978 --at-kyr {age}");
        Rows::of(&run(&folder, &words)).column("summer_half_w_m2")[0]
    };
    close(&[of("0"), of("127")], &[366.051, 384.396], 0.01);
}

#[test]
fn published_solstices_and_annual_means() {
    // Closed forms by a general library, S0 = 1361, orbit of 1950. The published orbit is rounded to
    // 0.001 degrees of obliquity: up to 0.009 W/m2 at 18 W/m2 a degree.
    let folder = Folder::new();
    let words = "insolation daily --latitude 65 --sun-longitude 0,90,180,270";
    let daily = Rows::of(&run(&folder, &format!("{words} {AT_0}")));
    close(
        &daily.column("insolation_w_m2"),
        &[184.469, 477.973, 181.913, 3.038],
        9e-3,
    );
    let words = format!("insolation annual --latitude 0,15,30,45,60,65,75,90 {AT_0}");
    let annual = Rows::of(&run(&folder, &words)).column("insolation_w_m2");
    let expected = [
        415.58613, 402.69419, 365.20581, 306.94613, 236.33257, 213.70224, 185.63774, 172.39557,
    ];
    close(&annual, &expected, 2e-3);
}

#[test]
fn analytic_the_half_year_between_equinoxes_does_not_feel_the_perihelion() {
    let folder = Folder::new();
    let energy = |eccentricity: &str, perihelion: &str| {
        let words = format!(
            "insolation season --from-longitude march-equinox --to-longitude september-equinox \
             --latitude 65 --at-kyr 0 --config short.toml \
             --set orbit.eccentricity={{kind=\"constant\",eccentricity={eccentricity}}} \
             --set orbit.obliquity={{kind=\"constant\",obliquity_deg=23.446}} \
             --set orbit.perihelion={{kind=\"constant_heliocentric\",heliocentric_deg={perihelion}}}"
        );
        let rows = Rows::of(&run(&folder, &words));
        [rows.column("energy_mj_m2")[0], rows.column("length_day")[0]]
    };
    let ([winter, long], [summer, short]) = (energy("0.05", "90"), energy("0.05", "270"));
    let [circle, _] = energy("0", "0");
    assert!(
        (winter - summer).abs() < 1e-9 && long - short > 20.0,
        "{long} {short}"
    );
    let shape = 1.0 / (1.0_f64 - 0.05 * 0.05).sqrt();
    assert!((winter / circle - shape).abs() < 1e-7, "{winter} {circle}");
    // 5.84366718e9 and 5.83635802e9 J/m2 by a general library.
    close(&[winter, circle], &[5843.66718, 5836.35802], 2e-4);
}

#[test]
fn analytic_dates_and_longitudes_meet_at_the_equinox() {
    let folder = Folder::new();
    let date = Rows::of(&run(
        &folder,
        &format!("insolation daily --latitude -40 --date 03-21 {AT_0}"),
    ));
    assert!(date.column("sun_longitude_deg")[0].abs() < 1e-4);
    assert_eq!(date.rows[0][1], "03-21");
    let words = format!("insolation daily --latitude -40 --sun-longitude 0 {AT_0}");
    let longitude = Rows::of(&run(&folder, &words));
    let name = "insolation_w_m2";
    close(&date.column(name), &longitude.column(name), 1e-4);
}

#[test]
fn anomalies_configurations_and_files_hold_together() {
    let folder = Folder::new();
    let words =
        "insolation daily --latitude 65 --sun-longitude 90 --from-kyr 20 --to-kyr 0 --step-kyr 10";
    let plain = Rows::of(&run(&folder, words)).column("insolation_w_m2");
    let against = run(&folder, &format!("{words} --against-kyr 0"));
    let differences = Rows::of(&against).column("insolation_anomaly_w_m2");
    let expected: Vec<_> = plain.iter().map(|v| v - plain[2]).collect();
    close(&differences, &expected, 1.1e-4);
    // The configuration's own orbit and solar constant.
    let sun = "--config short.toml --set insolation.solar_constant_w_m2=680.5";
    let half = run(&folder, &format!("{words} {sun}"));
    assert!(half.out.contains("680.5 W m-2") && half.out.contains("kind = \"integrated\""));
    // Standard output and file.
    let to_file = run(&folder, &format!("{words} --out a/table.csv"));
    assert_eq!(to_file.out, "a/table.csv\n");
    let text = String::from_utf8(folder.read("a/table.csv")).expect("text");
    assert_eq!(Rows::read(&text).column("insolation_w_m2"), plain);
    assert!(
        run(&folder, &format!("{words} --out table.nc --quiet"))
            .out
            .is_empty()
    );
    let file = hdf5::File::open(folder.path("table.nc")).expect("a file");
    let values = file.dataset("insolation").expect("insolation");
    assert_eq!(values.shape(), [3, 1, 1]);
    close(&values.read_raw::<f64>().expect("numbers"), &plain, 1e-4);
}
