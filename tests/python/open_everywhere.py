"""Open every group of result files with h5py, xarray and nexusformat, and compare what they see.

Usage: python open_everywhere.py FILE...

Nothing about a file is assumed but the conventions it claims to follow: NXdata of the NeXus base classes, HDF5
dimension scales, the CF attributes `coordinates`, `flag_values` and `flag_meanings`, and units that pint reads.
Prints one line per file; the first thing that is wrong is printed and ends with exit status 1.
"""

import sys

import h5py
import numpy as np
import pint
import xarray as xr
from nexusformat.nexus import nxload

UNITS = pint.UnitRegistry()
ENGINES = ("h5netcdf", "netcdf4")


def text(value):
    return value.decode() if isinstance(value, bytes) else str(value)


def values(dataset):
    """All numbers of an h5py dataset, or all texts."""
    return dataset.asstr()[()] if h5py.check_string_dtype(dataset.dtype) else dataset[()]


def same(a, b):
    a, b = np.asarray(a), np.asarray(b)
    if a.shape != b.shape:
        return False
    if a.dtype.kind in "fiu":
        return np.array_equal(a, b, equal_nan=True)
    return [text(x) for x in a.ravel()] == [text(x) for x in b.ravel()]


def dimensions(dataset):
    """Names of the dimensions by the scales attached, which must lie in the same group."""
    if dataset.is_scale:
        return (dataset.name.rsplit("/", 1)[1],)
    names = []
    for position, dimension in enumerate(dataset.dims):
        assert len(dimension) == 1, f"dimension {position} has {len(dimension)} scales"
        scale = dimension[0]
        assert scale.parent == dataset.parent, f"the scale {scale.name} lies in another group"
        assert scale.shape == (dataset.shape[position],), f"{scale.name} has another length"
        names.append(scale.name.rsplit("/", 1)[1])
    return tuple(names)


def check_dataset(dataset, scan_axes):
    assert dataset.attrs.get("long_name"), "no long_name"
    if not h5py.check_string_dtype(dataset.dtype):
        name = dataset.name.rsplit("/", 1)[1]
        assert "units" in dataset.attrs or name in scan_axes, "no units"
        if "units" in dataset.attrs:
            UNITS.Unit(dataset.attrs["units"])
        if dataset.is_scale and name not in scan_axes:
            steps = np.diff(dataset[()])
            assert np.all(steps > 0), "not rising"
    if "flag_values" in dataset.attrs:
        meanings = dataset.attrs["flag_meanings"].split()
        assert len(meanings) == len(dataset.attrs["flag_values"]), "flags without meaning"
        assert np.isin(dataset[()], dataset.attrs["flag_values"]).all(), "values without meaning"


def check_nxdata(group):
    """NXdata: a signal, its axes in order, and where each further coordinate belongs."""
    signal = group[group.attrs["signal"]]
    dims = dimensions(signal)
    texts = {name for name in dims if h5py.check_string_dtype(group[name].dtype)}
    axes = tuple(text(name) for name in group.attrs.get("axes", ()))
    assert axes == tuple("." if name in texts else name for name in dims), f"axes {axes} of {dims}"
    for name in group.attrs.get("auxiliary_signals", ()):
        assert group[name].shape == signal.shape, f"{name} has another shape"
    for name in group:
        indices = group.attrs.get(f"{name}_indices")
        if indices is not None:
            positions = tuple(np.atleast_1d(indices))
            assert tuple(dims[i] for i in positions) == dimensions(group[name]), f"{name}_indices"
            listed = signal.attrs.get("coordinates", "").split()
            assert group[name].is_scale or name in listed, f"{name} is no coordinate of the signal"
    assert all(f"{name}_indices" in group.attrs for name in dims), "an axis without indices"


def check_xarray(path, group, engine):
    """The same variables, dimensions, coordinates, values and units; selection by value."""
    with xr.open_dataset(path, group=group.name, engine=engine, decode_times=False) as seen:
        assert set(seen.variables) == set(group), f"variables {set(seen.variables)}"
        for name, dataset in group.items():
            assert seen[name].dims == dimensions(dataset), f"dimensions {seen[name].dims} of {name}"
            assert same(seen[name].values, values(dataset)), f"values of {name}"
            assert seen[name].attrs.get("units") == dataset.attrs.get("units"), f"units of {name}"
            assert seen[name].attrs["long_name"] == dataset.attrs["long_name"], f"long_name of {name}"
            for further in dataset.attrs.get("coordinates", "").split():
                assert further in seen[name].coords, f"{further} is no coordinate of {name}"
        signal = seen[group.attrs["signal"]]
        for name in signal.dims:
            assert name in signal.coords, f"{name} is no coordinate of the signal"
            middle = signal.sizes[name] // 2
            at = signal.coords[name].values[middle]
            assert same(signal.sel({name: at}).values, signal.isel({name: middle}).values), f"selection by {name}"


def check_nexus(path, group):
    """A NeXus reader finds the signal and its axes."""
    data = nxload(path, "r")[group.name]
    assert data.nxclass == "NXdata", data.nxclass
    assert data.nxsignal.nxname == group.attrs["signal"], data.nxsignal
    dims = dimensions(group[group.attrs["signal"]])
    if "." not in group.attrs.get("axes", ()):
        axes = data.nxaxes or []
        assert tuple(axis.nxname for axis in axes) == dims, f"axes {axes}"
        for axis in axes:
            assert same(axis.nxvalue, values(group[axis.nxname])), f"values of {axis.nxname}"


def check_top(file):
    assert file.attrs["NX_class"] == "NXroot" and file.attrs["layout_version"] >= 1
    entry = file[file.attrs["default"]]
    assert entry.attrs["NX_class"] == "NXentry"
    assert entry[entry.attrs["default"]].attrs["NX_class"] == "NXdata"
    for name in ("title", "start_time", "end_time", "provenance/configuration"):
        assert h5py.check_string_dtype(entry[name].dtype), f"{name} is no text"
    return {text(name) for name in entry.attrs.get("scan_axes", ())}


def groups_of(file):
    found = [file]
    file.visititems(lambda _, item: found.append(item) if isinstance(item, h5py.Group) else None)
    return found


def check_file(path):
    """Checks all groups and returns how many hold data; an error is told with its place."""
    place, count = path, 0
    try:
        with h5py.File(path, "r") as file:
            scan_axes = check_top(file)
            for group in groups_of(file):
                place = f"{path}: {group.name}"
                assert "NX_class" in group.attrs, "no NX_class"
                for engine in ENGINES:
                    xr.open_dataset(path, group=group.name, engine=engine, decode_times=False).close()
                if group.attrs["NX_class"] != "NXdata":
                    continue
                count += 1
                for name, dataset in group.items():
                    place = f"{path}: {group.name}/{name}"
                    check_dataset(dataset, scan_axes)
                place = f"{path}: {group.name}"
                check_nxdata(group)
                check_nexus(path, group)
                for engine in ENGINES:
                    place = f"{path}: {group.name} with {engine}"
                    check_xarray(path, group, engine)
        assert count > 0, "no data"
    except Exception as error:
        raise SystemExit(f"{place}: {type(error).__name__}: {error}") from error
    return count


def main(paths):
    if not paths:
        raise SystemExit("Which files? python open_everywhere.py FILE...")
    for path in paths:
        print(f"{path}: {check_file(path)} groups of data open everywhere")


if __name__ == "__main__":
    main(sys.argv[1:])
