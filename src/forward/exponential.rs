//! A fast exponential for the layers' transmittances.

/// `exp(x)` for x in -87 to 0, to 3e-7 of its value; smaller x give 0 to within 1e-37.
///
/// Powers of two by bits and a polynomial between them, without branches, so that the compiler
/// can do several values at a time. It gives the same bits on every processor.
#[inline(always)]
pub(super) fn exp(x: f32) -> f32 {
    // Adding 1.5 * 2^23 rounds to an integer, which then stands in the lowest bits.
    const ROUND: f32 = 12_582_912.0;
    // ln 2 in two parts, so that the product with the integer is exact in the first.
    const LN2_HIGH: f32 = 0.693_359_4;
    const LN2_LOW: f32 = -2.121_944_4e-4;
    let x = x.max(-87.0);
    let rounded = x * std::f32::consts::LOG2_E + ROUND;
    let integer = rounded - ROUND;
    let r = x - integer * LN2_HIGH - integer * LN2_LOW;
    let series = 1.0
        + r * (1.0
            + r * (0.5
                + r * (1.666_666_6e-1
                    + r * (4.166_579_6e-2 + r * (8.333_452e-3 + r * 1.398_2e-3)))));
    f32::from_bits(series.to_bits().wrapping_add(rounded.to_bits() << 23))
}

#[cfg(test)]
mod tests {
    use super::exp;

    #[test]
    fn agrees_with_the_library() {
        for step in 0..870_000 {
            let x = -step as f32 * 1e-4;
            let exact = f64::from(x).exp();
            // 3e-7 is two to three units in the last place of f32.
            assert!((f64::from(exp(x)) / exact - 1.0).abs() < 3e-7, "{x}");
        }
        assert!(exp(-1e6) < 1e-37);
        assert_eq!(exp(0.0), 1.0);
    }
}
