//! From values as stored to numbers: missing data, valid range, packing, unsigned integers.

use crate::netcdf_files::{Samples, ValueKind, Variable, with_values};

/// Values at or below this are taken as missing radiances: files use several negative codes between
/// -999.9 and -9999 without declaring them.
const UNDECLARED_FILL: f64 = -900.0;

/// How the stored values of one variable become numbers.
///
/// Missing values and the valid range are tested on the stored value, then it is unpacked (CF
/// conventions 2.5.1 and 8.1; NetCDF Users Guide, attribute conventions).
#[derive(Debug, Clone, PartialEq)]
pub struct Decoder {
    missing: Vec<f64>,
    stored_range: (f64, f64),
    unpacked_range: (f64, f64),
    scale: f64,
    offset: f64,
    /// What is added to a negative stored value that stands for an unsigned one.
    wrap: f64,
    undeclared_fill: bool,
}

/// A [`Decoder`] in plain numbers.
#[derive(Debug, Clone, Copy)]
pub struct DecodeMany {
    missing: [f64; 2],
    stored: (f64, f64),
    unpacked: (f64, f64),
    above: f64,
    scale: f64,
    offset: f64,
    wrap: f64,
}

impl DecodeMany {
    /// As [`Decoder::decode`].
    #[inline(always)]
    pub fn decode(&self, stored: f64) -> f64 {
        let stored = if stored < 0.0 { stored + self.wrap } else { stored };
        let value = stored * self.scale + self.offset;
        let valid = (stored >= self.stored.0)
            & (stored <= self.stored.1)
            & (value >= self.unpacked.0)
            & (value <= self.unpacked.1)
            & (value > self.above)
            & (stored != self.missing[0])
            & (stored != self.missing[1]);
        if valid { value } else { f64::NAN }
    }
}

/// Every number; what is infinite is none.
const ALL: (f64, f64) = (f64::MIN, f64::MAX);

impl Decoder {
    /// The decoder that a variable's attributes ask for.
    pub fn of(variable: &Variable) -> Self {
        let kind = variable.kind;
        let wrap = unsigned_wrap(variable);
        let stored = |value: f64| as_stored(value, kind, wrap);
        let numbers = |name: &str| variable.attribute(name).and_then(|value| value.numbers());
        let number = |name: &str| variable.attribute(name).and_then(|value| value.number());
        let mut missing: Vec<f64> = numbers("missing_value").unwrap_or_default();
        missing.extend(number("_FillValue").or_else(|| default_fill(kind)));
        let missing = missing.into_iter().map(stored).collect();
        let range = match numbers("valid_range").as_deref() {
            Some(&[low, high]) => (low, high),
            _ => {
                let low = number("valid_min").unwrap_or(ALL.0);
                (low, number("valid_max").unwrap_or(ALL.1))
            }
        };
        let scale = number("scale_factor").unwrap_or(1.0);
        let offset = number("add_offset").unwrap_or(0.0);
        let packed = scale != 1.0 || offset != 0.0;
        // A range with a fraction on packed integers is meant for the unpacked values.
        let on_unpacked = packed && !kind.is_float() && has_float_range(variable);
        let (stored_range, unpacked_range) = match on_unpacked {
            true => (ALL, range),
            false => ((stored(range.0), stored(range.1)), ALL),
        };
        Self { missing, stored_range, unpacked_range, scale, offset, wrap, undeclared_fill: false }
    }

    /// The same, which takes unpacked values of -900 and below as missing as well.
    pub fn with_undeclared_fill(mut self) -> Self {
        self.undeclared_fill = true;
        self
    }

    /// The number that a stored value stands for; NaN where it is missing.
    #[inline]
    pub fn decode(&self, stored: f64) -> f64 {
        let stored = self.unsigned(stored);
        let value = stored * self.scale + self.offset;
        // Written so that NaN is missing, whatever it is compared with, and so is what is infinite.
        let valid = stored >= self.stored_range.0
            && stored <= self.stored_range.1
            && value >= self.unpacked_range.0
            && value <= self.unpacked_range.1
            && !(self.undeclared_fill && value <= UNDECLARED_FILL)
            && !self.missing.contains(&stored);
        if valid { value } else { f64::NAN }
    }

    /// The same for many values of one type, without a branch, so that several are done at once;
    /// `None` where there are more values that mean "missing" than it looks for.
    pub fn for_many(&self) -> Option<DecodeMany> {
        let missing = match *self.missing {
            [] => [f64::NAN; 2],
            [one] => [one, f64::NAN],
            [one, other] => [one, other],
            _ => return None,
        };
        let low = if self.undeclared_fill { UNDECLARED_FILL } else { f64::NEG_INFINITY };
        Some(DecodeMany {
            missing,
            stored: self.stored_range,
            unpacked: self.unpacked_range,
            above: low,
            scale: self.scale,
            offset: self.offset,
            wrap: self.wrap,
        })
    }

    /// The number that a stored one stands for where negative ones stand for large ones.
    #[inline]
    pub fn unsigned(&self, stored: f64) -> f64 {
        if stored < 0.0 { stored + self.wrap } else { stored }
    }

    /// All values as numbers; strings are missing.
    #[allow(clippy::unnecessary_cast)] // One of the types is f64 itself.
    pub fn decode_all(&self, samples: &Samples) -> Vec<f64> {
        with_values!(
            samples,
            values => values.iter().map(|&value| self.decode(value as f64)).collect(),
            strings => vec![f64::NAN; strings.len()]
        )
    }

    /// How many values are taken as missing only because they are -900 or below.
    #[allow(clippy::unnecessary_cast)] // One of the types is f64 itself.
    pub fn undeclared_fills(&self, samples: &Samples) -> usize {
        if !self.undeclared_fill {
            return 0;
        }
        let declared = Self { undeclared_fill: false, ..self.clone() };
        let is_one =
            |stored: f64| self.is_low(stored) && declared.decode(stored) <= UNDECLARED_FILL;
        with_values!(
            samples,
            values => match self.may_be_undeclared(values.iter().map(|&value| value as f64)) {
                true => values.iter().filter(|&&value| is_one(value as f64)).count(),
                false => 0,
            },
            _strings => 0
        )
    }

    /// Whether any stored value could be that low: looked for without a branch, several at once, for
    /// every value of a file passes here.
    #[inline]
    fn may_be_undeclared(&self, mut stored: impl Iterator<Item = f64>) -> bool {
        match self.wrap != 0.0 {
            true => stored.any(|stored| self.is_low(stored)),
            false => stored.fold(false, |any, stored| {
                any | (stored * self.scale + self.offset <= UNDECLARED_FILL)
            }),
        }
    }

    #[inline]
    fn is_low(&self, stored: f64) -> bool {
        self.unsigned(stored) * self.scale + self.offset <= UNDECLARED_FILL
    }

    /// Whether stored values differ from the numbers they stand for.
    pub fn is_packed(&self) -> bool {
        self.scale != 1.0 || self.offset != 0.0
    }

    /// Whether negative integers stand for large positive ones.
    pub fn is_unsigned(&self) -> bool {
        self.wrap != 0.0
    }

    /// The stored values that mean "missing".
    pub fn missing_values(&self) -> &[f64] {
        &self.missing
    }
}

fn has_float_range(variable: &Variable) -> bool {
    use crate::netcdf_files::AttributeValue::Numbers;
    ["valid_range", "valid_min", "valid_max"].iter().any(|name| {
        matches!(variable.attribute(name), Some(Numbers(samples)) if samples.kind().is_float())
    })
}

/// `_Unsigned = "true"` (in any case) on a signed integer: bits are read as unsigned.
fn unsigned_wrap(variable: &Variable) -> f64 {
    let asked = variable.text("_Unsigned").is_some_and(|text| text.eq_ignore_ascii_case("true"));
    match (asked, variable.kind) {
        (true, ValueKind::I8) => 256.0,
        (true, ValueKind::I16) => 65_536.0,
        (true, ValueKind::I32) => 4_294_967_296.0,
        (true, ValueKind::I64) => 18_446_744_073_709_551_616.0,
        _ => 0.0,
    }
}

/// A fill or limit given in another type, as the variable itself would hold it.
fn as_stored(value: f64, kind: ValueKind, wrap: f64) -> f64 {
    match kind {
        ValueKind::F32 => f64::from(value as f32),
        _ if value < 0.0 => value + wrap,
        _ => value,
    }
}

/// What the library writes where nothing was put. Bytes have no default fill: all their values are
/// in use.
fn default_fill(kind: ValueKind) -> Option<f64> {
    match kind {
        ValueKind::I16 => Some(-32_767.0),
        ValueKind::U16 => Some(65_535.0),
        ValueKind::I32 => Some(-2_147_483_647.0),
        ValueKind::U32 => Some(4_294_967_295.0),
        ValueKind::I64 => Some(-9_223_372_036_854_775_806.0),
        ValueKind::U64 => Some(18_446_744_073_709_551_614.0),
        ValueKind::F32 | ValueKind::F64 => Some(9.969_209_968_386_869e36),
        _ => None,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::netcdf_files::{Attribute, AttributeValue, Storage};

    fn variable(kind: ValueKind, attributes: Vec<(&str, AttributeValue)>) -> Variable {
        let attribute =
            |(name, value): (&str, AttributeValue)| Attribute { name: name.into(), value };
        Variable {
            path: "v".into(),
            name: "v".into(),
            group: 0,
            dimensions: Vec::new(),
            kind,
            attributes: attributes.into_iter().map(attribute).collect(),
            storage: Storage::default(),
        }
    }

    fn decoder(kind: ValueKind, attributes: Vec<(&str, AttributeValue)>) -> Decoder {
        Decoder::of(&variable(kind, attributes))
    }

    #[test]
    fn fill_and_range_are_tested_before_unpacking() {
        // The form of packed radiances met in agency files: shorts that are meant unsigned.
        let decoder = decoder(
            ValueKind::I16,
            vec![
                ("_Unsigned", "TRUE".into()),
                ("_FillValue", 1023_i16.into()),
                ("valid_range", vec![0_i16, -2].into()),
                ("scale_factor", 0.5_f32.into()),
                ("add_offset", 10.0_f32.into()),
            ],
        );
        assert_eq!(decoder.decode(4.0), 12.0);
        assert!(decoder.decode(1023.0).is_nan());
        // -3 stands for 65533, inside of the range that ends at 65534; -1 for 65535, outside.
        assert_eq!(decoder.decode(-3.0), 65_533.0 * 0.5 + 10.0);
        assert!(decoder.decode(-1.0).is_nan());
    }

    #[test]
    fn many_are_decoded_as_each_is_alone() {
        let packed = vec![
            ("_Unsigned", "true".into()),
            ("_FillValue", 1023_i16.into()),
            ("valid_range", vec![0_i16, -2].into()),
            ("scale_factor", 0.5_f32.into()),
        ];
        let plain = vec![("_FillValue", (-9999.0_f32).into())];
        let some = [4.0, 1023.0, -3.0, -1.0, -899.5, -999.0, -9999.0, f64::NAN, f64::INFINITY, 0.0];
        for decoder in [
            decoder(ValueKind::I16, packed),
            decoder(ValueKind::F32, plain.clone()),
            decoder(ValueKind::F32, plain).with_undeclared_fill(),
            decoder(ValueKind::I8, vec![]),
        ] {
            let many = decoder.for_many().unwrap();
            for stored in some {
                let (one, other) = (decoder.decode(stored), many.decode(stored));
                assert_eq!(one.to_bits(), other.to_bits(), "{stored}: {one} {other}");
            }
        }
        let three = vec![("missing_value", vec![-1.0_f64, -2.0, -3.0].into())];
        assert!(decoder(ValueKind::F32, three).for_many().is_none());
    }

    #[test]
    fn several_missing_values_and_defaults_count() {
        let decoder =
            decoder(ValueKind::F32, vec![("missing_value", vec![-999.9_f64, -888.0].into())]);
        assert!(decoder.decode(f64::from(-999.9_f32)).is_nan(), "given in another precision");
        assert!(decoder.decode(-888.0).is_nan());
        assert!(decoder.decode(f64::from(9.96921e36_f32)).is_nan(), "the library's default");
        assert!(decoder.decode(f64::NAN).is_nan());
        assert!(decoder.decode(f64::INFINITY).is_nan() && decoder.decode(-f64::INFINITY).is_nan());
        assert_eq!(decoder.decode(-5.0), -5.0);
    }

    #[test]
    fn bytes_have_no_default_fill() {
        assert_eq!(decoder(ValueKind::I8, vec![]).decode(-127.0), -127.0);
        assert_eq!(decoder(ValueKind::U8, vec![]).decode(255.0), 255.0);
    }

    #[test]
    fn one_sided_limits_count() {
        let decoder = decoder(ValueKind::F64, vec![("valid_max", 400.0.into())]);
        assert_eq!(decoder.decode(-1e9), -1e9);
        assert!(decoder.decode(400.5).is_nan());
    }

    #[test]
    fn a_range_with_a_fraction_on_packed_integers_is_for_unpacked_values() {
        let decoder = decoder(
            ValueKind::I16,
            vec![("valid_range", vec![0.0_f32, 200.0].into()), ("scale_factor", 0.01_f32.into())],
        );
        assert!((decoder.decode(15_000.0) - 150.0).abs() < 1e-4, "0.01 in f32 is off by 2e-8");
        assert!(decoder.decode(30_000.0).is_nan());
    }

    #[test]
    fn undeclared_fills_are_missing_only_where_asked_for_and_are_counted() {
        let plain = decoder(ValueKind::F32, vec![("_FillValue", (-9999.0_f32).into())]);
        assert_eq!(plain.decode(-999.5), -999.5);
        let wary = plain.with_undeclared_fill();
        assert!(wary.decode(-999.5).is_nan());
        assert_eq!(wary.decode(-899.0), -899.0);
        assert_eq!(wary.undeclared_fills(&vec![-9999.0_f32, -999.5, -1.0, 4.0].into()), 1);
    }
}
