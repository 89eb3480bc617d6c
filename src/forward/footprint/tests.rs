use super::*;
use crate::forward::atmosphere::{Changes, Standard};
use crate::forward::response::Response;

/// Brightness temperature, K.
fn bt(wavenumber: f64, radiance: f32) -> f64 {
    C2 * wavenumber / (C1 * wavenumber.powi(3) / f64::from(radiance)).ln_1p()
}

fn boxes(wavenumbers: &[f64]) -> Vec<Channel> {
    wavenumbers
        .iter()
        .map(|nu| Channel { wavenumber: *nu, response: Response::Box { width: 1.0 } })
        .collect()
}

fn scenery(
    standard: Standard,
    changes: &Changes,
    wavenumbers: &[f64],
    sun: Option<f64>,
) -> Scenery {
    let view = View {
        zenith_angles: vec![0.0, 40.0],
        sun_zenith: sun,
        cloud_heights: vec![1.0, 3.0, 5.0, 8.0, 13.0, 17.0],
    };
    Scenery::new(vec![Atmosphere::new(standard, changes)], &boxes(wavenumbers), view)
}

fn clear(temperature: f64, ground: Surface) -> Footprint {
    Footprint {
        air: 0.0,
        view_zenith: 0.0,
        sun_zenith: 150.0,
        surface_temperature: temperature,
        ground: vec![(ground, 1.0)],
        reflectivity_factor: 1.0,
        covers: Vec::new(),
    }
}

fn under(particles: Particles, height: f64, optical_depth: f64) -> Footprint {
    Footprint {
        covers: vec![Cover { particles, height, amount: 1.0, optical_depth, scattering: 0.0 }],
        ..clear(299.7, Surface::Sea)
    }
}

const TABLE: [f64; 16] = [
    667.5, 690.0, 715.0, 748.0, 831.0, 909.0, 961.0, 1042.0, 1128.0, 1163.0, 1231.0, 1306.0,
    1540.0, 2143.0, 2390.0, 2616.0,
];

#[test]
fn scenes_agree_with_an_independent_model() {
    let night = scenery(Standard::Tropical, &Changes::default(), &TABLE, None);
    let desert = scenery(Standard::MidlatitudeSummer, &Changes::default(), &TABLE, None);
    let mut report = String::new();
    let mut worst = 0.0f64;
    for (name, scenery, footprint, expected) in scenes(&night, &desert) {
        let found: Vec<f64> =
            scenery.radiances(&footprint).iter().zip(TABLE).map(|(r, nu)| bt(nu, *r)).collect();
        let line: Vec<String> =
            found.iter().zip(expected).map(|(a, b)| format!("{:6.1}({:+.1})", a, a - b)).collect();
        report += &format!("{name:12} {}\n", line.join(" "));
        let most = found.iter().zip(expected).map(|(a, b)| (a - b).abs()).fold(0.0, f64::max);
        worst = worst.max(most);
    }
    assert!(worst <= 3.0, "{worst}\n{report}");
}

type Scene<'a> = (&'static str, &'a Scenery, Footprint, [f64; 16]);

#[rustfmt::skip]
fn scenes<'a>(night: &'a Scenery, desert: &'a Scenery) -> Vec<Scene<'a>> {
    let opaque = 30.0;
    vec![
        ("clear sea", night, clear(299.7, Surface::Sea),
         [245., 222., 240., 264., 294.1, 295.4, 296.0, 292., 295.4, 296.2, 295.3, 261., 252., 299., 280., 299.3]),
        ("cirrus .1", night, under(Particles::Ice, 13.0, 0.1),
         [245., 222., 238., 260., 288.7, 290.2, 291.5, 289., 292.1, 292.9, 292.1, 259., 250., 297., 279., 298.1]),
        ("cirrus .3", night, under(Particles::Ice, 13.0, 0.3),
         [245., 222., 235., 254., 279.0, 280.8, 283.0, 282., 285.9, 286.6, 285.8, 255., 247., 293., 276., 295.9]),
        ("cirrus 1", night, under(Particles::Ice, 13.0, 1.0),
         [245., 221., 227., 237., 253.0, 255.1, 259.1, 263., 267.0, 267.5, 266.9, 242., 236., 279., 265., 288.2]),
        ("cirrus 3", night, under(Particles::Ice, 13.0, 3.0),
         [245., 221., 219., 220., 223.0, 223.7, 226.2, 232., 234.2, 234.1, 233.6, 223., 221., 247., 242., 268.6]),
        ("deep", night, under(Particles::LargeIce, 17.0, opaque),
         [245., 218., 203., 198., 194.8, 194.8, 194.8, 199., 196.8, 194.8, 194.9, 198., 195., 195., 202., 194.8]),
        ("stratus", night, under(Particles::Droplets, 1.0, opaque),
         [245., 222., 240., 264., 291.3, 292.0, 292.3, 289., 291.4, 292.1, 291.4, 260., 252., 294., 279., 293.9]),
        ("mid cloud", night, under(Particles::Droplets, 5.0, opaque),
         [245., 222., 240., 256., 270.2, 270.2, 270.2, 267., 269.3, 269.9, 269.7, 253., 252., 270., 266., 272.0]),
        ("dust .3", night, under(Particles::Dust, 3.0, 0.3),
         [245., 222., 240., 264., 292.3, 293.0, 292.9, 288., 291.8, 293.4, 293.7, 261., 252., 298., 280., 298.2]),
        ("dust 1", night, under(Particles::Dust, 3.0, 1.0),
         [245., 222., 240., 263., 289.3, 289.0, 288.2, 283., 286.7, 288.9, 290.6, 260., 252., 296., 279., 296.0]),
        ("ash", night, under(Particles::Ash, 8.0, 0.5),
         [245., 222., 239., 260., 284.0, 280.0, 277.1, 270., 275.8, 280.4, 286.4, 258., 252., 295., 278., 296.1]),
        ("desert", desert, clear(320.0, Surface::Desert),
         [248., 229., 240., 264., 305.2, 309.2, 309.2, 298., 297.7, 298.4, 301.9, 263., 251., 315., 283., 313.9]),
    ]
}
