//! What a NetCDF-4 file can hold: types, lengths, variables.
//!
//! Format facts (NetCDF-4 format specification): the classic types used here are double, float,
//! int and char; a char variable has the string length as its last dimension.

/// Type of a variable in the file.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Kind {
    /// 64-bit floating point.
    F64,
    /// 32-bit floating point.
    F32,
    /// 32-bit integer.
    I32,
    /// Characters; the last dimension is the length of the strings.
    Char,
}

/// Numbers to write; the type must be that of the variable.
#[derive(Clone, Copy, Debug)]
pub enum Values<'a> {
    /// 64-bit floating point.
    F64(&'a [f64]),
    /// 32-bit floating point.
    F32(&'a [f32]),
    /// 32-bit integers.
    I32(&'a [i32]),
    /// ASCII characters.
    Char(&'a [u8]),
}

impl Values<'_> {
    pub(super) fn kind(&self) -> Kind {
        match self {
            Self::F64(_) => Kind::F64,
            Self::F32(_) => Kind::F32,
            Self::I32(_) => Kind::I32,
            Self::Char(_) => Kind::Char,
        }
    }

    pub(super) fn len(&self) -> usize {
        match self {
            Self::F64(v) => v.len(),
            Self::F32(v) => v.len(),
            Self::I32(v) => v.len(),
            Self::Char(v) => v.len(),
        }
    }
}

/// Length of a dimension.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Length {
    /// Known when the file is made.
    Fixed(usize),
    /// Grows with the records.
    Unlimited,
}

/// What stands for "no value" in a variable.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Missing {
    /// NaN, declared as `_FillValue` (floating-point variables only).
    Nan,
    /// The variable has no missing values; no `_FillValue` is written.
    Never,
}

/// A variable to define.
#[derive(Clone, Debug)]
pub struct Definition<'a> {
    /// Name.
    pub name: &'a str,
    /// Type.
    pub kind: Kind,
    /// Names of its dimensions, slowest first. A variable named like its only dimension is the
    /// coordinate variable of that dimension.
    pub dimensions: &'a [&'a str],
    /// Records per chunk; stores the variable in shuffled, deflated chunks. Needed by variables
    /// over an unlimited dimension.
    pub records_per_chunk: Option<usize>,
    /// Missing values.
    pub missing: Missing,
}

/// A defined variable.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct VariableId(pub(super) usize);

/// Bytes by which a file in memory grows; its size is known to that.
pub(super) const MEMORY_STEP: usize = 4096;

/// Where a file lies.
#[derive(Clone, Copy, PartialEq, Eq)]
pub(super) enum Place {
    /// In the file system.
    Disk,
    /// In memory only.
    Memory,
}
