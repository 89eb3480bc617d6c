//! Values as a file holds them: one vector of the file's own type.

use serde::{Deserialize, Serialize};

/// The type of a variable's or an attribute's values.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Serialize, Deserialize)]
#[allow(missing_docs)]
pub enum ValueKind {
    I8,
    U8,
    I16,
    U16,
    I32,
    U32,
    I64,
    U64,
    F32,
    F64,
    /// Strings of any length.
    Text,
    /// Single characters; read as their bytes.
    Character,
    /// A type that the program does not read: compound, enumeration, opaque, ragged.
    Other,
}

impl ValueKind {
    /// Bytes of one value in memory; none where values have no fixed size.
    pub fn size(self) -> Option<usize> {
        match self {
            Self::I8 | Self::U8 | Self::Character => Some(1),
            Self::I16 | Self::U16 => Some(2),
            Self::I32 | Self::U32 | Self::F32 => Some(4),
            Self::I64 | Self::U64 | Self::F64 => Some(8),
            Self::Text | Self::Other => None,
        }
    }

    /// Whether the values are numbers.
    pub fn is_number(self) -> bool {
        !matches!(self, Self::Text | Self::Character | Self::Other)
    }

    /// Whether the values are numbers with a fraction.
    pub fn is_float(self) -> bool {
        matches!(self, Self::F32 | Self::F64)
    }

    /// The type's name as the netCDF documents spell it.
    pub fn label(self) -> &'static str {
        match self {
            Self::I8 => "byte",
            Self::U8 => "ubyte",
            Self::I16 => "short",
            Self::U16 => "ushort",
            Self::I32 => "int",
            Self::U32 => "uint",
            Self::I64 => "int64",
            Self::U64 => "uint64",
            Self::F32 => "float",
            Self::F64 => "double",
            Self::Text => "string",
            Self::Character => "char",
            Self::Other => "user-defined",
        }
    }
}

/// Values of one type, in row-major order. Characters are held as `U8`.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[allow(missing_docs)]
pub enum Samples {
    I8(Vec<i8>),
    U8(Vec<u8>),
    I16(Vec<i16>),
    U16(Vec<u16>),
    I32(Vec<i32>),
    U32(Vec<u32>),
    I64(Vec<i64>),
    U64(Vec<u64>),
    F32(Vec<f32>),
    F64(Vec<f64>),
    Text(Vec<String>),
}

/// Runs `$body` with `$values` bound to the typed vector: `$number` for numbers, `$text` for strings.
///
/// The match stands outside of the loop over values, so that the loop is compiled for each type.
macro_rules! with_values {
    ($samples:expr, $values:ident => $number:expr, $strings:ident => $text:expr) => {
        match $samples {
            $crate::netcdf_files::Samples::I8($values) => $number,
            $crate::netcdf_files::Samples::U8($values) => $number,
            $crate::netcdf_files::Samples::I16($values) => $number,
            $crate::netcdf_files::Samples::U16($values) => $number,
            $crate::netcdf_files::Samples::I32($values) => $number,
            $crate::netcdf_files::Samples::U32($values) => $number,
            $crate::netcdf_files::Samples::I64($values) => $number,
            $crate::netcdf_files::Samples::U64($values) => $number,
            $crate::netcdf_files::Samples::F32($values) => $number,
            $crate::netcdf_files::Samples::F64($values) => $number,
            $crate::netcdf_files::Samples::Text($strings) => $text,
        }
    };
}
pub(crate) use with_values;

impl Samples {
    /// How many values there are.
    pub fn len(&self) -> usize {
        with_values!(self, values => values.len(), strings => strings.len())
    }

    /// Whether there is no value at all.
    pub fn is_empty(&self) -> bool {
        self.len() == 0
    }

    /// The type of the values.
    pub fn kind(&self) -> ValueKind {
        match self {
            Self::I8(_) => ValueKind::I8,
            Self::U8(_) => ValueKind::U8,
            Self::I16(_) => ValueKind::I16,
            Self::U16(_) => ValueKind::U16,
            Self::I32(_) => ValueKind::I32,
            Self::U32(_) => ValueKind::U32,
            Self::I64(_) => ValueKind::I64,
            Self::U64(_) => ValueKind::U64,
            Self::F32(_) => ValueKind::F32,
            Self::F64(_) => ValueKind::F64,
            Self::Text(_) => ValueKind::Text,
        }
    }

    /// The value at `index` as a number; NaN for a string and behind the end.
    #[allow(clippy::unnecessary_cast)] // One of the types is f64 itself.
    pub fn get(&self, index: usize) -> f64 {
        with_values!(
            self,
            values => values.get(index).map_or(f64::NAN, |value| *value as f64),
            _strings => f64::NAN
        )
    }

    /// All values as numbers; a string is NaN.
    #[allow(clippy::unnecessary_cast)] // One of the types is f64 itself.
    pub fn to_f64(&self) -> Vec<f64> {
        with_values!(
            self,
            values => values.iter().map(|value| *value as f64).collect(),
            strings => vec![f64::NAN; strings.len()]
        )
    }
}

macro_rules! samples_from {
    ($($number:ty => $kind:ident),*) => {$(
        impl From<Vec<$number>> for Samples {
            fn from(values: Vec<$number>) -> Self { Self::$kind(values) }
        }
        impl From<$number> for Samples {
            fn from(value: $number) -> Self { Self::$kind(vec![value]) }
        }
    )*};
}
samples_from!(i8 => I8, u8 => U8, i16 => I16, u16 => U16, i32 => I32, u32 => U32,
              i64 => I64, u64 => U64, f32 => F32, f64 => F64, String => Text);

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn values_come_out_as_numbers_whatever_their_type() {
        assert_eq!(Samples::from(vec![-3_i16, 4]).to_f64(), [-3.0, 4.0]);
        assert_eq!(Samples::from(vec![0.5_f32]).get(0), 0.5);
        assert!(Samples::from(vec![0.5_f32]).get(1).is_nan());
        assert!(Samples::Text(vec!["7".into()]).get(0).is_nan());
    }
}
