"""What the benchmarks are compared with: the same work by netCDF4 and numpy.

Usage: python3 python_side.py read FILE ROUNDS
       python3 python_side.py tabulate FILE TABLE ROUNDS WAVENUMBER...

Prints the shortest time of so many rounds, in seconds; `tabulate` prints a second time, that of the
numbers alone, without writing the table.
"""

import sys
import time

import netCDF4
import numpy as np

# 2 h c^2 and h c / k in the units of radiance in mW m-2 sr-1 (cm-1)-1 (docs/physics.md).
C1, C2 = 1.1910429723971884e-5, 1.4387768775039338


def bands(dataset):
    """Radiance and wavenumber of each band."""
    for variable in dataset.variables.values():
        if variable.name.startswith("radiance"):
            axis = variable.dimensions[-1].replace("channel", "wavenumber")
            yield variable, dataset.variables[axis]


def read(path):
    """All radiances, without numpy's masks, which would take as long again."""
    with netCDF4.Dataset(path) as dataset:
        dataset.set_auto_mask(False)
        return [radiance[...] for radiance, _ in bands(dataset)]


def temperatures(path, wanted):
    """Brightness temperatures of the channels nearest to `wanted`, a column each: every band is read
    as a whole once, for its chunks hold all channels."""
    with netCDF4.Dataset(path) as dataset:
        dataset.set_auto_mask(False)
        columns = {}
        for radiance, axis in bands(dataset):
            nu = axis[...].astype("f8")
            inside = [at for at in wanted if nu[0] - 0.5 <= at <= nu[-1] + 0.5]
            if not inside:
                continue
            values = radiance[...].reshape(-1, nu.size)
            for at in inside:
                channel = np.abs(nu - at).argmin()
                column = values[:, channel].astype("f8")
                with np.errstate(invalid="ignore", divide="ignore"):
                    found = C2 * nu[channel] / np.log1p(C1 * nu[channel] ** 3 / column)
                columns[at] = np.where(column > 0, found, np.nan)
        return np.column_stack([columns[at] for at in wanted])


def tabulate(path, table, wanted):
    """A table as `radsieve tabulate` writes it: indices, place, temperatures."""
    numbers = temperatures(path, wanted)
    with netCDF4.Dataset(path) as dataset:
        radiance, _ = next(bands(dataset))
        shape = radiance.shape[:-1]
        place = [dataset.variables[name][...].ravel() for name in ("latitude", "longitude")]
    head = list(radiance_dimensions(path)) + ["lat", "lon"] + [f"bt({at:g})" for at in wanted]
    rows = np.column_stack([np.indices(shape).reshape(len(shape), -1).T, *place, numbers])
    form = ["%d"] * len(shape) + ["%.10g"] * (2 + len(wanted))
    np.savetxt(table, rows, fmt=form, delimiter=",", header=",".join(head), comments="")


def radiance_dimensions(path):
    with netCDF4.Dataset(path) as dataset:
        return next(bands(dataset))[0].dimensions[:-1]


def shortest(rounds, work):
    best = float("inf")
    for _ in range(rounds):
        begin = time.perf_counter()
        work()
        best = min(best, time.perf_counter() - begin)
    return best


if __name__ == "__main__":
    what, path = sys.argv[1:3]
    if what == "read":
        print(shortest(int(sys.argv[3]), lambda: read(path)))
    else:
        table, rounds, wanted = sys.argv[3], int(sys.argv[4]), [float(at) for at in sys.argv[5:]]
        print(shortest(rounds, lambda: tabulate(path, table, wanted)))
        print(shortest(rounds, lambda: temperatures(path, wanted)))
