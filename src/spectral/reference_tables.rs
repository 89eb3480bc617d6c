//! The reference tables against this room, to the digits that they carry.

use std::collections::HashMap;

use super::*;

/// One row: column name to text, for the text tells how many digits the number carries.
type Row = HashMap<String, String>;

fn rows(table: &str) -> Vec<Row> {
    let mut reader = csv::ReaderBuilder::new().comment(Some(b'#')).from_reader(table.as_bytes());
    reader.deserialize().map(|row| row.unwrap()).collect()
}

/// Half a unit in the last digit written, and a hair for the rounding of the comparison itself.
fn half_last_digit(text: &str) -> f64 {
    let (mantissa, exponent) = text.split_once('e').unwrap_or((text, "0"));
    let decimals = mantissa.split_once('.').map_or(0, |(_, decimals)| decimals.len());
    let exponent: i32 = exponent.parse().unwrap();
    0.5001 * 10f64.powi(exponent - i32::try_from(decimals).unwrap())
}

fn assert_agrees(computed: f64, row: &Row, column: &str) {
    let text = &row[column];
    let expected: f64 = text.parse().unwrap();
    let difference = (computed - expected).abs();
    assert!(difference <= half_last_digit(text), "{column}: {computed} instead of {text}\n{row:?}");
}

fn number(row: &Row, column: &str) -> f64 {
    row[column].parse().unwrap()
}

#[test]
fn every_table_names_its_source() {
    let folder = concat!(env!("CARGO_MANIFEST_DIR"), "/tests/reference_tables");
    for entry in std::fs::read_dir(folder).unwrap() {
        let text = std::fs::read_to_string(entry.unwrap().path()).unwrap();
        let mut lines = text.lines();
        assert!(lines.next().unwrap().starts_with("# source: "), "{text:.80}");
        assert!(lines.next().unwrap().starts_with("# how: "), "{text:.80}");
    }
}

#[test]
fn planck_function_slope_and_inverse() {
    let rows = rows(include_str!("../../tests/reference_tables/planck_checks.csv"));
    assert_eq!(rows.len(), 180);
    for row in &rows {
        let wavenumber = number(row, "wavenumber_cm-1");
        let temperature = number(row, "temperature_K");
        let radiance = planck(wavenumber, temperature);
        assert_agrees(radiance, row, "radiance_mW_m-2_sr-1_(cm-1)-1");
        assert_agrees(radiance, row, "radiance_astropy");
        let slope = planck_slope(wavenumber, temperature);
        assert_agrees(slope, row, "dBdT_mW_m-2_sr-1_(cm-1)-1_K-1");
        let back = brightness_temperature(wavenumber, radiance).unwrap();
        assert_agrees(back, row, "T_recovered_K");
        let wavelength = 0.01 / wavenumber;
        let per_micrometre = 1e-6 * planck_wavelength(wavelength, temperature);
        assert_agrees(per_micrometre, row, "radiance_W_m-2_sr-1_um-1_same_point");
    }
}

#[test]
fn brightness_temperatures_of_round_radiances() {
    let rows = rows(include_str!("../../tests/reference_tables/inverse_planck_checks.csv"));
    assert_eq!(rows.len(), 27);
    for row in &rows {
        let wavenumber = number(row, "wavenumber_cm-1");
        let radiance = number(row, "radiance_mW_m-2_sr-1_(cm-1)-1");
        let temperature = brightness_temperature(wavenumber, radiance).unwrap();
        assert_agrees(temperature, row, "brightness_temperature_K");
    }
}

#[test]
fn blackbody_fractions() {
    let rows = rows(include_str!("../../tests/reference_tables/blackbody_fraction.csv"));
    assert_eq!(rows.len(), 59);
    let mut compared_with_handbook = 0;
    for row in &rows {
        let fraction = blackbody_fraction(number(row, "lambdaT_um_K"));
        assert_agrees(fraction, row, "F_0_lambdaT_mpmath_series");
        assert_agrees(fraction, row, "F_numeric_quadrature");
        if row["note"].is_empty() {
            // The handbook used an older c2 and normalisation, which makes up to 5e-5.
            let handbook = number(row, "F_handbook_6dp_from_memory");
            assert!((fraction - handbook).abs() < 6e-5, "{row:?}");
            compared_with_handbook += 1;
        }
    }
    assert_eq!(compared_with_handbook, 56);
}

#[test]
fn total_radiance_and_the_share_of_the_sounders() {
    let rows = rows(include_str!("../../tests/reference_tables/stefan_boltzmann_checks.csv"));
    assert_eq!(rows.len(), 9);
    for row in &rows {
        let temperature = number(row, "temperature_K");
        let total = total_radiance(temperature);
        assert_agrees(std::f64::consts::PI * total, row, "sigmaT4_W_m-2");
        assert_agrees(total, row, "sigmaT4_over_pi_W_m-2_sr-1");
        let part = band_integral(600.0, 2800.0, temperature);
        assert_agrees(part, row, "integral_B_600_2800_cm-1_W_m-2_sr-1");
        assert_agrees(part / total, row, "fraction_of_total_in_600_2800_cm-1");
    }
}
