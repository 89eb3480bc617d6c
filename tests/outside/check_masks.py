"""Checks exported masks with general-purpose libraries and the CF community's checkers.

Usage: python3 tests/outside/check_masks.py BINARY [GRANULE ...]
Without granules, those of sample_granules/ are taken; one more is made here, of another shape.
Ledgers are written here by the description in docs/flags.md, as another program would.
"""

import datetime
import glob
import json
import os
import pathlib
import re
import shutil
import subprocess
import sys
import tempfile

import netCDF4
import numpy as np
import xarray

from tally import Tally

HERE = pathlib.Path(__file__).resolve().parent
CLOUDY, UNUSUAL, BAD_SPECTRUM = 1 << 0, 1 << 7, 1 << 4
DEAD = 1 << 1
NOT_ASSESSED, BY_TEST, BY_PERSON = 0, 1, 2

tally = Tally()


def check(name, good, detail=""):
    tally.check(bool(good), f"{name} {detail}")


def main():
    binary = os.path.abspath(sys.argv[1])
    with tempfile.TemporaryDirectory() as folder:
        granules = sys.argv[2:] or sorted(glob.glob(str(HERE.parents[1] / "sample_granules/*.nc")))
        granules.append(made_here(os.path.join(folder, "made_here.nc")))
        for granule in granules:
            print(f"   {granule}")
            one_granule(binary, granule, os.path.join(folder, pathlib.Path(granule).stem))
    tally.end()


def made_here(path):
    """Three footprint dimensions, an axis in m-1 that falls, and a band of wavelengths."""
    shape = {"scan_line": 6, "position": 5, "detector": 3}
    with netCDF4.Dataset(path, "w") as file:
        file.title = "Synthetic granule for tests, no data for science"
        file.source = "synthetic data of the imaginary Brindle sounder"
        for name, length in shape.items():
            file.createDimension(name, length)
        add_band(file, "lw", "wavenumber_lw", 100 * np.arange(760.0, 745.0, -0.625), "m-1",
                 "sensor_band_central_radiation_wavenumber", list(shape))
        add_band(file, "sw", "wavelength_sw", 1e4 / np.arange(2155.0, 2160.0, 0.5), "um",
                 "sensor_band_central_radiation_wavelength", list(shape))
        for name, units, first in [("lat", "degrees_north", 40.0), ("lon", "degrees_east", -20.0)]:
            variable = file.createVariable(name, "f4", list(shape))
            variable.standard_name = {"lat": "latitude", "lon": "longitude"}[name]
            variable.units = units
            variable[:] = first + np.arange(6 * 5 * 3).reshape(6, 5, 3) * 0.125
        time = file.createVariable("time", "f8", ["scan_line"])
        time.standard_name = "time"
        time.units = "seconds since 2020-01-01 00:00:00"
        time[:] = np.arange(6) * 8.0
    return path


def add_band(file, band, dimension, axis, units, standard_name, footprints):
    file.createDimension(dimension, len(axis))
    variable = file.createVariable(dimension, "f8", [dimension])
    variable.units = units
    variable.standard_name = standard_name
    variable[:] = axis
    radiance = file.createVariable(f"rad_{band}", "f4", footprints + [dimension])
    radiance.standard_name = "toa_outgoing_radiance_per_unit_wavenumber"
    radiance.units = "mW m-2 sr-1 (cm-1)-1"
    radiance[:] = 50.0


def export(binary, granule, campaign, out, *arguments):
    command = [binary, "export", "--campaign", campaign, "--out", out, *arguments, granule]
    run = subprocess.run(command, capture_output=True, text=True, timeout=120)
    check("export ends well", run.returncode == 0, run.stderr)
    return run.stdout.strip()


def one_granule(binary, granule, folder):
    campaign = os.path.join(folder, "campaign")
    os.makedirs(campaign)
    undecided = export(binary, granule, campaign, os.path.join(folder, "undecided"))
    described = look_undecided(undecided)
    decisions = some_decisions(described)
    write_ledger(campaign, granule, described, decisions)
    mask = export(binary, granule, campaign, os.path.join(folder, "masks"))
    look_decided(mask, described)
    look_lined_up(mask, granule, described)
    check_list(binary, granule, campaign, folder, mask)
    for path in (undecided, mask):
        check_cf(path, folder)
        check_header(path)


def look_undecided(path):
    with xarray.open_dataset(path) as mask:
        check("nothing is assessed", (mask.review_state == NOT_ASSESSED).all())
        check("nothing is usable", (mask.usable == 0).all())
        channels = [name for name in mask if name.startswith("channel_flag")]
        check("channels have flags", len(channels) > 0)
        return {
            "hash": mask.attrs["granule_blake3"],
            "size": int(mask.attrs["granule_size_bytes"]),
            "footprints": [[name, mask.sizes[name]] for name in mask.footprint_flag.dims],
            "count": mask.footprint_flag.size,
            "channels": channels,
        }


def some_decisions(described):
    """Flags, a withdrawal, an undo, a band that is lost, a test's word, a sign-off."""
    count = described["count"]
    person = [
        {"act": "flag", "flag": "cloudy", "footprints": [[0, 12]]},
        {"act": "withdraw", "flag": "cloudy", "footprints": [[10, 2]], "why": "clear after all"},
        {"act": "flag", "flag": "unusual", "footprints": [[5, 2]]},
        {"act": "flag", "flag": "so2", "footprints": [[0, count]]},
    ]
    person.append({"act": "revoke", "decision": {"writer": "check-1", "sequence": len(person)}})
    if len(described["channels"]) > 1:
        band = described["channels"][-1].removeprefix("channel_flag_")
        described["lost"] = band
        person.append({"act": "flag", "flag": "bad_spectrum", "footprints": [[20, 3]],
                       "bands": [band]})
    person.append({"test": "a test", "act": "flag", "flag": "cloudy", "footprints": [[11, 3]]})
    person.append({"test": "a test", "act": "assess", "footprints": [[11, 3]]})
    person.append({"act": "sign_off", "summary": "checked", "rest_assessed": [[14, count - 15]]})
    return person


def write_ledger(campaign, granule, described, decisions):
    name = pathlib.Path(granule).name
    folder = os.path.join(campaign, "ledgers", f"x-{described['hash'][:12]}")
    os.makedirs(folder)
    header = {
        "format": "radsieve-ledger",
        "version": 1,
        "writer": "check-1",
        "granule": {"hash": described["hash"], "size": described["size"], "name": name,
                    "footprints": described["footprints"]},
        "author": {"person": "checker", "host": "outside", "process": 1},
        "program": "check_masks.py",
        "opened": "2026-01-31T11:00:00Z",
    }
    start = datetime.datetime(2026, 1, 31, 11)
    with open(os.path.join(folder, "check.jsonl"), "w") as ledger:
        ledger.write(json.dumps(header) + "\n")
        for sequence, decision in enumerate(decisions, start=1):
            at = (start + datetime.timedelta(seconds=sequence)).isoformat() + "Z"
            ledger.write(json.dumps({"sequence": sequence, "at": at, **decision}) + "\n")


def bits(variable):
    """Masks by their meanings, read as CF says: split on blanks, pair in order."""
    names = variable.attrs["flag_meanings"].split()
    masks = np.atleast_1d(variable.attrs["flag_masks"])
    check("as many masks as meanings", len(names) == len(masks), variable.name)
    check("masks have the type of the variable", masks.dtype == variable.dtype, variable.name)
    return dict(zip(names, masks.tolist()))


def look_decided(path, described):
    with xarray.open_dataset(path) as mask:
        flags = mask.footprint_flag.values.ravel()
        review = mask.review_state.values.ravel()
        usable = mask.usable.values.ravel()
        masks = bits(mask.footprint_flag)
        check("bits are those released", masks["cloudy"] == CLOUDY and masks["unusual"] == UNUSUAL)
        expected = np.zeros(described["count"], dtype=int)
        expected[:10] |= CLOUDY
        expected[12:14] |= CLOUDY  # by the test; it cannot flag what the person withdrew
        expected[5:7] |= UNUSUAL
        check("flags are what was decided", (flags == expected).all(), f"{flags[:20]}")
        states = np.full(described["count"], BY_PERSON)
        states[12:14] = BY_TEST
        states[-1] = NOT_ASSESSED
        check("review states are what was decided", (review == states).all(), f"{review[:20]}")
        rule = (expected & CLOUDY == 0) & (states != NOT_ASSESSED)
        check("usable is the default rule", (usable == rule).all())
        check("channels are unflagged", all((mask[name] == 0).all() for name in described["channels"]))
        for name in described["channels"]:
            check("channel bits", bits(mask[name])["dead"] == DEAD)
        check("signed off", mask.attrs["signed_off_by"] == "checker")
        check("cautions", "not a warning service" in mask.attrs["comment"])
        if "lost" in described:
            lost = mask[f"footprint_flag_{described['lost']}"].values.ravel()
            both = expected.copy()
            both[20:23] |= BAD_SPECTRUM
            check("a lost band shows in its own flags", (lost == both).all())


def look_lined_up(path, granule, described):
    """Dimensions, positions and wavenumbers are the granule's, in its order."""
    with netCDF4.Dataset(granule) as original, xarray.open_dataset(path) as mask:
        for name, length in described["footprints"]:
            check("footprint dimensions", len(original.dimensions[name]) == length, name)
        for coordinate in ("latitude", "longitude"):
            theirs = [v for v in original.variables.values()
                      if getattr(v, "standard_name", "") == coordinate]
            if theirs:
                same = np.allclose(mask[coordinate].values, theirs[0][:], rtol=0, atol=1e-9)
                check("positions are the granule's", same, coordinate)
        for name in described["channels"]:
            dimension = mask[name].dims[0]
            original_lengths = {n: len(d) for n, d in original.dimensions.items()}
            check("channels line up", original_lengths.get(dimension) == mask.sizes[dimension], name)
            axes = [v for v in mask.variables.values() if v.dims == (dimension,)
                    and v.attrs.get("units") == "cm-1"]
            check("channels have their wavenumbers", len(axes) == 1, name)
            theirs = original.variables.get(dimension)
            if theirs is not None and axes:
                factor = {"cm-1": 1.0, "m-1": 0.01}.get(theirs.units)
                expected = theirs[:] * factor if factor else 1e4 / theirs[:]
                # 1e-9 relative: rounding of the conversion, far below any channel spacing.
                check("wavenumbers", np.allclose(axes[0].values, expected, rtol=1e-9, atol=0), name)


def check_list(binary, granule, campaign, folder, mask):
    path = export(binary, granule, campaign, os.path.join(folder, "lists"), "--format", "csv")
    with open(path) as file, xarray.open_dataset(mask) as decided:
        header = file.readline().strip().split(",")
        rows = [line.strip().split(",") for line in file]
        dimensions = list(decided.footprint_flag.dims)
        check("the list has the granule's indices", header[: len(dimensions)] == dimensions)
        listed = [tuple(int(cell) for cell in row[: len(dimensions)]) for row in rows]
        usable = [tuple(index) for index in np.argwhere(decided.usable.values == 1).tolist()]
        check("the list holds the usable footprints", listed == usable)


def check_cf(path, folder):
    report = os.path.join(folder, "report.json")
    subprocess.run(["compliance-checker", "--test=cf:1.8", "-f", "json", "-o", report, path],
                   capture_output=True, text=True, timeout=300)
    with open(report) as file:
        results = json.load(file)["cf:1.8"]
    findings = [f"{entry['name']}: {'; '.join(entry['msgs'])}"
                for level in ("high_priorities", "medium_priorities", "low_priorities")
                for entry in results[level] if entry["value"][0] < entry["value"][1]]
    check("compliance-checker finds nothing", not findings, "\n   ".join(findings))
    check("compliance-checker checked something", results["possible_points"] > 20)
    if shutil.which("cfchecks"):
        cfchecks(path)
    else:
        print("!! SKIPPED: cfchecks is not installed")


def cfchecks(path):
    import compliance_checker
    names = pathlib.Path(compliance_checker.__file__).parent / "data/cf-standard-name-table.xml"
    run = subprocess.run(["cfchecks", "-s", str(names), "-a", str(HERE / "cf_area_types.xml"),
                          "-r", str(HERE / "cf_regions.xml"), path],
                         capture_output=True, text=True, timeout=300)
    counts = dict(re.findall(r"^(ERRORS detected|WARNINGS given): *(\d+)", run.stdout, re.MULTILINE))
    if "udunits" in run.stderr.lower():
        print("!! SKIPPED: cfchecks needs the UDUNITS library (apt-get install libudunits2-0)")
        return
    check("cfchecks gives its counts", "ERRORS detected" in counts, run.stdout + run.stderr)
    errors, warnings = counts.get("ERRORS detected"), counts.get("WARNINGS given")
    clean = run.returncode == 0 and errors == "0" and warnings == "0"
    check("cfchecks finds no error and no warning", clean, run.stdout)


def check_header(path):
    if not shutil.which("ncdump"):
        print("!! SKIPPED: ncdump is not installed")
        return
    run = subprocess.run(["ncdump", "-h", path], capture_output=True, text=True, timeout=60)
    check("ncdump reads the header", run.returncode == 0, run.stderr)
    for words in (":Conventions = \"CF-1.8\"", "int footprint_flag(", "byte review_state("):
        check("the header shows the contract", words in run.stdout, words)


if __name__ == "__main__":
    main()
