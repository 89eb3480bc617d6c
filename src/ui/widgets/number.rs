//! Round numbers for axes and legends.

/// Round values within a range, at most so many, with the decimals that tell them apart.
/// None where the range is empty or not finite.
pub(in crate::ui) fn ticks(low: f64, high: f64, most: usize) -> (Vec<f64>, usize) {
    let width = high - low;
    if !(width > 0.0 && width.is_finite()) || most == 0 {
        return (Vec::new(), 0);
    }
    let rough = width / most as f64;
    let power = 10f64.powf(rough.log10().floor());
    let step = [1.0, 2.0, 5.0, 10.0]
        .into_iter()
        .map(|factor| factor * power)
        .find(|step| *step >= rough * 0.999)
        .unwrap_or(10.0 * power);
    let (first, last) = ((low / step).ceil(), (high / step).floor());
    // A step below the resolution of the numbers themselves has no ticks that differ.
    if !(step > 0.0 && step.is_finite() && last - first <= most as f64 + 1.0)
        || low + step == low
        || high + step == high
    {
        return (Vec::new(), 0);
    }
    let decimals = (-step.log10().floor()).clamp(0.0, 12.0) as usize;
    let count = (last - first + 1.0).max(0.0) as usize;
    ((0..count).map(|index| (first + index as f64) * step).collect(), decimals)
}

/// A value in about four digits, for legends: `287.4`, `-0.125`, `1.2e-6`, `no value`.
pub(in crate::ui) fn short(value: f64) -> String {
    let size = value.abs();
    if value.is_nan() {
        "no value".to_string()
    } else if value == 0.0 {
        "0".to_string()
    } else if !(1e-3..1e6).contains(&size) {
        format!("{value:.1e}")
    } else {
        let decimals = (3.0 - size.log10().floor()).clamp(0.0, 6.0) as usize;
        let text = format!("{value:.decimals$}");
        match text.contains('.') {
            true => text.trim_end_matches('0').trim_end_matches('.').to_string(),
            false => text,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn ticks_are_round() {
        assert_eq!(ticks(198.3, 301.0, 5), (vec![200.0, 250.0, 300.0], 0));
        assert_eq!(ticks(0.0, 1.0, 5), (vec![0.0, 0.2, 0.4, 0.6000000000000001, 0.8, 1.0], 1));
        assert_eq!(ticks(5.0, 5.0, 4).0, Vec::<f64>::new());
        assert_eq!(ticks(f64::NAN, 5.0, 4).0, Vec::<f64>::new());
    }

    #[test]
    fn values_are_shortened() {
        for (value, text) in [
            (287.4321, "287.4"),
            (-0.125, "-0.125"),
            (0.0, "0"),
            (300.0, "300"),
            (1.23e-6, "1.2e-6"),
            (12345.6, "12346"),
            (f64::NAN, "no value"),
        ] {
            assert_eq!(short(value), text);
        }
    }

    proptest! {
        #[test]
        fn ticks_lie_in_the_range_and_are_few(low: f64, width in 0f64..1e9, most in 0usize..30) {
            let high = low + width;
            let (ticks, _) = ticks(low, high, most);
            prop_assert!(ticks.len() <= most + 2);
            for tick in ticks {
                let slack = 1e-9 * (high - low) + 1e-9 * low.abs();
                prop_assert!(tick >= low - slack && tick <= high + slack);
            }
            short(low);
        }
    }
}
