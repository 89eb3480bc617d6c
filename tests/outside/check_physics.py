"""Radiances and brightness temperatures against astropy, on the program's answers to `planck` and
`spectrum`, for granules made here and for the sample granules.

Usage: python3 tests/outside/check_physics.py BINARY
"""

import json
import subprocess
import sys
import tempfile
from pathlib import Path

import astropy.constants as constants
import astropy.units as u
import netCDF4
import numpy as np
import xarray
from astropy.modeling.models import BlackBody

from tally import Tally

SAMPLES = Path(__file__).resolve().parents[2] / "sample_granules"
WORKING_UNIT = u.mW / u.m**2 / u.sr * u.cm

# Both sides compute in f64 from the same exact constants. An error of 2e-16 in the exponent, which
# is up to 35 for cold scenes in the short wave, is 1e-14 in the radiance; a margin of ten is added.
RELATIVE = 1e-13
# A radiance read from a file: the same, and the unit conversions on both sides.
RELATIVE_READ = 1e-12
# 1e-13 of 350 K, with a margin of thirty for the inverse.
KELVIN = 1e-9


def black_body(wavenumber, temperature):
    """Radiance per wavenumber, mW m-2 sr-1 (cm-1)-1, by astropy; arguments in cm-1 and K."""
    frequency = (np.asarray(wavenumber) / u.cm * constants.c).to(u.Hz)
    per_hertz = BlackBody(temperature=temperature * u.K)(frequency)
    return (per_hertz * constants.c).to_value(WORKING_UNIT)


def black_body_per_micrometre(wavenumber, temperature):
    """Radiance per wavelength, W m-2 sr-1 um-1, by astropy; arguments in cm-1 and K."""
    scale = 1.0 * u.W / u.m**2 / u.sr / u.um
    wavelength = (1e4 / np.asarray(wavenumber)) * u.um
    return BlackBody(temperature=temperature * u.K, scale=scale)(wavelength).value


def temperature_of(wavenumber, radiance):
    """Brightness temperature, K, with astropy's constants; NaN where there is none."""
    h, c, k = (constant.si.value for constant in (constants.h, constants.c, constants.k_B))
    per_metre = 100.0 * np.asarray(wavenumber)
    # 1 mW m-2 sr-1 (cm-1)-1 is 1e-5 W m-2 sr-1 (m-1)-1.
    si = np.where(radiance > 0, 1e-5 * np.asarray(radiance), np.nan)
    return h * c * per_metre / (k * np.log1p(2 * h * c**2 * per_metre**3 / si))


def answer(binary, *arguments):
    """What the program prints as JSON."""
    done = subprocess.run(
        [binary, *map(str, arguments), "--json"], capture_output=True, text=True, timeout=60
    )
    if done.returncode != 0:
        raise RuntimeError(f"{arguments} ended with {done.returncode}: {done.stderr.strip()}")
    return json.loads(done.stdout)


def check_planck(tally, binary):
    """The converter, both ways, in three kinds of units."""
    for wavenumber in (600, 667.38, 900.3125, 1231.33, 1595, 2143.27, 2616.5, 2800):
        for temperature in (180, 220, 288.15, 330):
            where = f"{wavenumber} cm-1, {temperature} K"
            working = float(black_body(wavenumber, temperature))
            per_micrometre = float(black_body_per_micrometre(wavenumber, temperature))
            per_hertz = working * WORKING_UNIT / constants.c
            for unit, expected in (
                ("mW m-2 sr-1 (cm-1)-1", working),
                ("W m-2 sr-1 um-1", per_micrometre),
                ("W m-2 sr-1 Hz-1", float(per_hertz.to_value(u.W / u.m**2 / u.sr / u.Hz))),
            ):
                place = ("planck", "--at", wavenumber, "--unit", unit)
                found = answer(binary, *place, "--bt", temperature)["radiance"]
                tally.near(found, expected, RELATIVE * expected, f"radiance, {where}, {unit}")
                found = answer(binary, *place, "--rad", repr(expected))["bt_K"]
                tally.near(found, temperature, KELVIN, f"bt, {where}, {unit}")


def write_granule(path, wavenumbers, kind):
    """A granule of 3 x 4 black bodies as netCDF4 writes it; returns their temperatures."""
    temperatures = 190.0 + 12.5 * np.arange(12).reshape(3, 4)
    with netCDF4.Dataset(path, "w") as file:
        file.title = "synthetic black bodies, no data for science"
        for name, length in (("line", 3), ("position", 4), ("channel", len(wavenumbers))):
            file.createDimension(name, length)
        axis = file.createVariable("spectral_axis", "f8", ("channel",))
        dimensions = ("line", "position", "channel")
        if kind == "per wavenumber":
            axis.units, axis.standard_name = "cm-1", "sensor_band_central_radiation_wavenumber"
            axis[:] = wavenumbers
            spectra = file.createVariable("radiance", "f8", dimensions)
            spectra.units = "W m-2 sr-1 (m-1)-1"
            spectra.standard_name = "toa_outgoing_radiance_per_unit_wavenumber"
            spectra[:] = [[1e-5 * black_body(wavenumbers, t) for t in row] for row in temperatures]
        elif kind == "per wavelength":
            axis.units, axis.standard_name = "um", "sensor_band_central_radiation_wavelength"
            axis[:] = 1e4 / wavenumbers
            spectra = file.createVariable("radiance", "f8", dimensions)
            spectra.units = "W m-2 sr-1 um-1"
            spectra.standard_name = "toa_outgoing_radiance_per_unit_wavelength"
            spectra[:] = [
                [black_body_per_micrometre(wavenumbers, t) for t in row] for row in temperatures
            ]
        else:
            axis.units, axis.standard_name = "m-1", "sensor_band_central_radiation_wavenumber"
            axis[:] = 100.0 * wavenumbers
            spectra = file.createVariable("bt", "i2", dimensions, fill_value=-32768)
            spectra.units, spectra.standard_name = "K", "toa_brightness_temperature"
            # Halves and quarters of a kelvin are exact, so packing loses nothing.
            spectra.scale_factor, spectra.add_offset = 0.25, 250.0
            spectra[:] = np.repeat(temperatures[:, :, np.newaxis], len(wavenumbers), axis=2)
    return temperatures


def check_black_bodies(tally, binary):
    """Granules whose every channel has one and the same known temperature."""
    wavenumbers = np.concatenate([np.arange(650, 700, 0.625), np.arange(2200, 2230, 0.625)])
    with tempfile.TemporaryDirectory() as folder:
        for kind in ("per wavenumber", "per wavelength", "temperature"):
            path = Path(folder) / "granule.nc"
            temperatures = write_granule(path, wavenumbers, kind)
            for line, position in ((0, 0), (1, 2), (2, 3)):
                band = only_band(answer(binary, "spectrum", path, "--at", f"{line},{position}"))
                expected = temperatures[line, position]
                where = f"black body {kind} of {expected} K"
                radiances = black_body(wavenumbers, expected)
                all_near(tally, band["wavenumber_cm-1"], wavenumbers, 1e-15 * wavenumbers * 4, where)
                all_near(tally, band["bt_K"], np.full(len(wavenumbers), expected), KELVIN, where)
                found = band["radiance_mW_m-2_sr-1_(cm-1)-1"]
                all_near(tally, found, radiances, RELATIVE_READ * radiances, where)


def check_missing(tally, binary):
    """A negative radiance is kept and has no temperature; a fill value has neither."""
    wavenumbers = np.arange(2200, 2230, 0.625)
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "granule.nc"
        write_granule(path, wavenumbers, "per wavenumber")
        with netCDF4.Dataset(path, "a") as file:
            file["radiance"][0, 0, 3] = -1e-7
            file["radiance"][0, 0, 5] = netCDF4.default_fillvals["f8"]
        band = only_band(answer(binary, "spectrum", path, "--at", "0,0"))
    radiances, temperatures = band["radiance_mW_m-2_sr-1_(cm-1)-1"], band["bt_K"]
    tally.near(radiances[3], -0.01, 1e-15, "a negative radiance")
    tally.check(temperatures[3] is None, f"a negative radiance has a BT of {temperatures[3]}")
    tally.check(radiances[5] is None, f"a fill value became a radiance of {radiances[5]}")
    tally.check(temperatures[5] is None, f"a fill value became a BT of {temperatures[5]}")
    tally.check(None not in temperatures[6:] + temperatures[:3], "valid channels have a BT")


def only_band(spectrum):
    (band,) = spectrum["bands"]
    return band


def all_near(tally, found, expected, tolerance, where):
    """Whole lists, missing (null here, NaN there) in the same places."""
    found = np.array([np.nan if value is None else value for value in found])
    expected, tolerance = np.asarray(expected, float), np.broadcast_to(tolerance, np.shape(expected))
    if found.shape != expected.shape:
        tally.check(False, f"{where}: {found.shape} values instead of {expected.shape}")
        return
    same_missing = np.isnan(found) == np.isnan(expected)
    near = np.isnan(expected) | (np.abs(found - expected) <= tolerance)
    bad = np.flatnonzero(~(same_missing & near))
    first = f": value {bad[0]} is {found[bad[0]]!r} instead of {expected[bad[0]]!r}" if bad.size else ""
    tally.check(not bad.size, f"{where}, {bad.size} of {found.size} values{first}")


SPECTRA = {
    "toa_outgoing_radiance_per_unit_wavenumber": "radiance",
    "toa_brightness_temperature": "temperature",
    "brightness_temperature": "temperature",
}
AXES = ("sensor_band_central_radiation_wavenumber", "radiation_wavenumber")


def own_bands(path):
    """Each band of a granule: dimensions, wavenumbers (cm-1), kind, values in f64, by xarray.

    Values are unpacked here, because xarray unpacks small integers in f32."""
    with xarray.open_dataset(path, mask_and_scale=False, decode_times=False) as dataset:
        axes = {v.dims[0]: v for v in dataset.variables.values() if v.attrs.get("standard_name") in AXES}
        for variable in dataset.variables.values():
            kind = SPECTRA.get(variable.attrs.get("standard_name"))
            if kind is None or variable.dims[-1] not in axes:
                continue
            axis = axes[variable.dims[-1]]
            per_centimetre = {"cm-1": 1.0, "m-1": 100.0}[axis.attrs["units"]]
            values = variable.values.astype(float)
            values[variable.values == variable.attrs.get("_FillValue")] = np.nan
            values = values * variable.attrs.get("scale_factor", 1.0) + variable.attrs.get("add_offset", 0.0)
            yield variable, axis.values / per_centimetre, kind, values


def positions(bands):
    """Corners, one inside, and for each band the footprints with most missing and most negative."""
    shape = bands[0][3].shape[:-1]
    chosen = {tuple(int(part * (length - 1)) for length in shape) for part in (0.0, 0.4, 1.0)}
    for _, _, _, values in bands:
        for odd in (np.isnan(values), values < 0):
            chosen.add(tuple(map(int, np.unravel_index(odd.sum(axis=-1).argmax(), shape))))
    return sorted(chosen)


def check_sample(tally, binary, path):
    """Some footprints of a sample granule, those with most missing and most negative values too."""
    bands = list(own_bands(path))
    tally.check(bands, f"{path.name}: xarray finds spectra by their standard names")
    for position in positions(bands):
        found = answer(binary, "spectrum", path, "--at", ",".join(map(str, position)))["bands"]
        tally.check(len(found) == len(bands), f"{path.name}: {len(found)} bands")
        for (variable, wavenumbers, kind, values), band in zip(bands, found):
            where = f"{path.name}, {band['band']}, footprint {position}"
            spectrum = values[position]
            if kind == "radiance":
                tally.check(variable.attrs["units"] == "mW m-2 sr-1 (cm-1)-1", f"{where}: unit")
                radiances, temperatures = spectrum, temperature_of(wavenumbers, spectrum)
            else:
                there = ~np.isnan(spectrum)
                radiances = np.full(spectrum.shape, np.nan)
                radiances[there] = [
                    black_body(nu, t) for nu, t in zip(wavenumbers[there], spectrum[there])
                ]
                temperatures = spectrum
            all_near(tally, band["wavenumber_cm-1"], wavenumbers, 1e-12 * wavenumbers, where)
            tolerance = RELATIVE_READ * np.nan_to_num(np.abs(radiances))
            all_near(tally, band["radiance_mW_m-2_sr-1_(cm-1)-1"], radiances, tolerance, where)
            all_near(tally, band["bt_K"], temperatures, KELVIN, where)


def main():
    binary = str(Path(sys.argv[1]).resolve())
    tally = Tally()
    check_planck(tally, binary)
    check_black_bodies(tally, binary)
    check_missing(tally, binary)
    samples = sorted(SAMPLES.glob("*.nc"))
    tally.check(samples, "there are no sample granules")
    for path in samples:
        check_sample(tally, binary, path)
    tally.end()


if __name__ == "__main__":
    main()
