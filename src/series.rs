//! What a run produces, as plain data: variables with their axes and metadata, and records.
//!
//! This is the currency between the model, the files, the analysis and the figures. Nothing here
//! knows how a number was made or where it will be stored.

/// An axis of a variable besides age.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Axis {
    /// Latitude bands, south to north.
    Latitude,
    /// Edges between bands, both poles included.
    LatitudeEdge,
    /// The twelve months.
    Month,
    /// Levels of the ocean column, top to bottom.
    Depth,
    /// Southern, then northern hemisphere.
    Hemisphere,
    /// Latitudes chosen for coastal upwelling.
    CoastalLatitude,
}

/// How the numbers of a variable are to be read (CF 1.11 `units_metadata`).
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Scale {
    /// A temperature on its scale.
    Temperature,
    /// A difference of two temperatures.
    TemperatureDifference,
    /// Anything else.
    Plain,
}

/// What the numbers of a record stand for (CF 1.11 `cell_methods` over age).
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Statistic {
    /// The mean over the record's interval.
    Mean,
    /// One instant, named in the variable's long name.
    Point,
}

/// One variable of a run: a number, or an array over [`Axis`] values, for every record.
#[derive(Clone, Debug, PartialEq)]
pub struct Variable {
    /// Name in the file, with a unit suffix only where the quantity would be ambiguous.
    pub name: &'static str,
    /// Axes after age, slowest first; empty for one number per record.
    pub axes: &'static [Axis],
    /// UDUNITS string.
    pub units: &'static str,
    /// What it is, in words.
    pub long_name: &'static str,
    /// CF standard name, where the table has one.
    pub standard_name: Option<&'static str>,
    /// How the numbers are to be read.
    pub scale: Scale,
    /// What the numbers stand for.
    pub statistic: Statistic,
}

/// One record: means over an interval of model time.
#[derive(Clone, Debug, PartialEq)]
pub struct Record {
    /// Middle of the interval, kyr before 1950 CE.
    pub age_kyr: f64,
    /// Older and younger end of the interval, kyr before 1950 CE.
    pub age_bounds_kyr: [f64; 2],
    /// Values of all variables, one after another in the order of declaration; NaN where a
    /// quantity does not exist (ocean of a band that is all land, an isotherm that outcrops).
    pub values: Vec<f64>,
}

/// One number against age.
#[derive(Clone, Debug, PartialEq)]
pub struct TimeSeries {
    /// Ages, kyr before 1950 CE, in the order of the file.
    pub age_kyr: Vec<f64>,
    /// Values at those ages.
    pub values: Vec<f64>,
}
