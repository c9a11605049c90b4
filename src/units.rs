//! Physical constants and the few unit conversions that are easy to get wrong.
//!
//! Numbers are SI `f64`; names carry the unit. Constants that a user may want to change live in
//! `configs/reference.toml`; here stand those that nobody tunes.

/// Earth's mean radius, m (IUGG mean radius R1 6371.0088 km, rounded; memory).
pub const EARTH_RADIUS_M: f64 = 6.371e6;
/// Celsius zero in kelvin (SI definition of the degree Celsius).
pub const CELSIUS_ZERO_K: f64 = 273.15;
/// Length of the year, days of 86 400 s (tropical year, as UDUNITS defines `year`).
pub const YEAR_DAYS: f64 = 365.2422;
/// Length of the year, s.
pub const YEAR_SECONDS: f64 = YEAR_DAYS * 86_400.0;
/// One petawatt, W.
pub const PETAWATT_W: f64 = 1.0e15;
/// Density of sea water times its specific heat, J m-3 K-1: 1025 kg m-3 x 3990 J kg-1 K-1
/// (handbook values; TEOS-10 gives 4.0995e6 at 10 degC and 35.165 g/kg, 0.2 % more).
pub const SEA_WATER_HEAT_CAPACITY_J_M3_K: f64 = 1025.0 * 3990.0;
/// Latent heat of melting times density of sea ice, J m-3: 334 000 J kg-1 x 917 kg m-3
/// (handbook values for fresh ice).
pub const SEA_ICE_LATENT_HEAT_J_M3: f64 = 334_000.0 * 917.0;
/// Freezing temperature of sea water of salinity 35, degC (TEOS-10: -1.92 at the surface;
/// -1.8 degC is the customary rounded value of the field, common practice).
pub const SEA_WATER_FREEZING_C: f64 = -1.8;
/// Latent heat of evaporation over the specific heat of air, K: 2.501e6 J kg-1 / 1004.6 J kg-1 K-1
/// (handbook values at 0 degC, dry air).
pub const LATENT_OVER_SPECIFIC_HEAT_K: f64 = 2.501e6 / 1004.6;
