//! The library's types and ours, both ways.

use netcdf::AttributeValue as LibraryAttribute;
use netcdf::types::{FloatType, IntType, NcVariableType};

use super::attribute::AttributeValue;
use super::samples::{Samples, ValueKind};

/// The library's type for values of `kind`; none for types that are not written.
pub fn library_kind(kind: ValueKind) -> Option<NcVariableType> {
    Some(match kind {
        ValueKind::I8 => NcVariableType::Int(IntType::I8),
        ValueKind::U8 => NcVariableType::Int(IntType::U8),
        ValueKind::I16 => NcVariableType::Int(IntType::I16),
        ValueKind::U16 => NcVariableType::Int(IntType::U16),
        ValueKind::I32 => NcVariableType::Int(IntType::I32),
        ValueKind::U32 => NcVariableType::Int(IntType::U32),
        ValueKind::I64 => NcVariableType::Int(IntType::I64),
        ValueKind::U64 => NcVariableType::Int(IntType::U64),
        ValueKind::F32 => NcVariableType::Float(FloatType::F32),
        ValueKind::F64 => NcVariableType::Float(FloatType::F64),
        ValueKind::Text => NcVariableType::String,
        ValueKind::Character | ValueKind::Other => return None,
    })
}

/// Our name for the library's type.
pub fn kind_of(library: &NcVariableType) -> ValueKind {
    match library {
        NcVariableType::Int(IntType::I8) => ValueKind::I8,
        NcVariableType::Int(IntType::U8) => ValueKind::U8,
        NcVariableType::Int(IntType::I16) => ValueKind::I16,
        NcVariableType::Int(IntType::U16) => ValueKind::U16,
        NcVariableType::Int(IntType::I32) => ValueKind::I32,
        NcVariableType::Int(IntType::U32) => ValueKind::U32,
        NcVariableType::Int(IntType::I64) => ValueKind::I64,
        NcVariableType::Int(IntType::U64) => ValueKind::U64,
        NcVariableType::Float(FloatType::F32) => ValueKind::F32,
        NcVariableType::Float(FloatType::F64) => ValueKind::F64,
        NcVariableType::String => ValueKind::Text,
        NcVariableType::Char => ValueKind::Character,
        _ => ValueKind::Other,
    }
}

/// An attribute as the library writes it: one number as a scalar, several as a vector.
pub fn library_attribute(value: &AttributeValue) -> LibraryAttribute {
    let samples = match value {
        AttributeValue::Text(text) => return LibraryAttribute::Str(text.clone()),
        AttributeValue::Texts(texts) => return LibraryAttribute::Strs(texts.clone()),
        AttributeValue::Numbers(samples) => samples,
    };
    match samples {
        Samples::I8(values) => LibraryAttribute::Schars(values.clone()),
        Samples::U8(values) => LibraryAttribute::Uchars(values.clone()),
        Samples::I16(values) => LibraryAttribute::Shorts(values.clone()),
        Samples::U16(values) => LibraryAttribute::Ushorts(values.clone()),
        Samples::I32(values) => LibraryAttribute::Ints(values.clone()),
        Samples::U32(values) => LibraryAttribute::Uints(values.clone()),
        Samples::I64(values) => LibraryAttribute::Longlongs(values.clone()),
        Samples::U64(values) => LibraryAttribute::Ulonglongs(values.clone()),
        Samples::F32(values) => LibraryAttribute::Floats(values.clone()),
        Samples::F64(values) => LibraryAttribute::Doubles(values.clone()),
        Samples::Text(texts) => LibraryAttribute::Strs(texts.clone()),
    }
}

/// An attribute as the library reads it.
pub fn attribute_of(library: LibraryAttribute) -> AttributeValue {
    AttributeValue::Numbers(match library {
        LibraryAttribute::Str(text) => return AttributeValue::Text(text),
        LibraryAttribute::Strs(texts) => return AttributeValue::Texts(texts),
        LibraryAttribute::Schar(value) => value.into(),
        LibraryAttribute::Schars(values) => values.into(),
        LibraryAttribute::Uchar(value) => value.into(),
        LibraryAttribute::Uchars(values) => values.into(),
        LibraryAttribute::Short(value) => value.into(),
        LibraryAttribute::Shorts(values) => values.into(),
        LibraryAttribute::Ushort(value) => value.into(),
        LibraryAttribute::Ushorts(values) => values.into(),
        LibraryAttribute::Int(value) => value.into(),
        LibraryAttribute::Ints(values) => values.into(),
        LibraryAttribute::Uint(value) => value.into(),
        LibraryAttribute::Uints(values) => values.into(),
        LibraryAttribute::Longlong(value) => value.into(),
        LibraryAttribute::Longlongs(values) => values.into(),
        LibraryAttribute::Ulonglong(value) => value.into(),
        LibraryAttribute::Ulonglongs(values) => values.into(),
        LibraryAttribute::Float(value) => value.into(),
        LibraryAttribute::Floats(values) => values.into(),
        LibraryAttribute::Double(value) => value.into(),
        LibraryAttribute::Doubles(values) => values.into(),
    })
}
