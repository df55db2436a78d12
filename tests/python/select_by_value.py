"""Select points of a two-axis scan by the values of its axes, as a user of xarray does.

Usage: python select_by_value.py RESULT.h5

The scan is that of tests/python.rs: `intensity` in W/cm^2 by `cep` in degrees. Asserts names, units, shapes, and that
what is selected by value is what stands at that place; exit status 1 with the first thing that is wrong.
"""

import sys

import numpy as np
import pint
import xarray as xr

UNITS = pint.UnitRegistry()

for engine in ("h5netcdf", "netcdf4"):
    with xr.open_dataset(sys.argv[1], group="entry/harmonics", engine=engine) as harmonics:
        spectrum = harmonics.spectrum
        assert spectrum.dims == ("intensity", "cep", "photon_energy"), spectrum.dims
        assert UNITS.Unit(harmonics.intensity.attrs["units"]).is_compatible_with("W/cm**2")
        assert UNITS.Unit(harmonics.cep.attrs["units"]) == UNITS.degree
        assert UNITS.Unit(harmonics.photon_energy.attrs["units"]) == UNITS.eV
        np.testing.assert_allclose(harmonics.cep.values, [0, 90, 180])
        np.testing.assert_allclose(harmonics.intensity.values, [2e13, 4e13])
        chosen = spectrum.sel(intensity=4e13, cep=180, method="nearest").sel(photon_energy=slice(5, 10))
        assert chosen.photon_energy.min() >= 5 and chosen.photon_energy.max() <= 10 and chosen.size > 10
        np.testing.assert_array_equal(
            chosen.values, spectrum.values[1, 2][(harmonics.photon_energy >= 5) & (harmonics.photon_energy <= 10)]
        )
        assert np.all(np.isfinite(chosen)) and np.all(chosen >= 0)
    with xr.open_dataset(sys.argv[1], group="entry/photoelectrons", engine=engine) as electrons:
        assert electrons["yield"].dims == ("intensity", "cep", "energy"), electrons["yield"].dims
        assert UNITS.Unit(electrons["yield"].attrs["units"]) == 1 / UNITS.eV
        chosen = electrons.sel(intensity=4e13, cep=180, method="nearest").sel(energy=slice(1, 10))
        assert chosen.energy.size > 40 and np.all(chosen["yield"] > 0)
        np.testing.assert_allclose(chosen["yield"], chosen.left + chosen.right, rtol=1e-12)
        # phases half a circle apart exchange left and right
        mirror = electrons.sel(intensity=4e13, cep=0, method="nearest").sel(energy=slice(1, 10))
        np.testing.assert_allclose(chosen.left, mirror.right, rtol=1e-6, atol=1e-9 * float(chosen["yield"].max()))
    with xr.open_dataset(sys.argv[1], group="entry/levels", engine=engine) as levels:
        assert levels.population.dims == ("intensity", "cep", "state"), levels.population.dims
    with xr.open_dataset(sys.argv[1], group="entry/summary", engine=engine) as summary:
        ionized = summary.ionization_probability
        assert ionized.dims == ("intensity", "cep"), ionized.dims
        assert ionized.sel(cep=0).isel(intensity=1) > ionized.sel(cep=0).isel(intensity=0)
        assert (summary.status == 0).all() or (summary.status == 1).all(), summary.status.values
