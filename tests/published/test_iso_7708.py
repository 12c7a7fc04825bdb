"""The ISO 7708 conventions against their published table and 50 % points."""

import numpy as np
import pytest

from psdflow.sizes.respirable import aerodynamic_diameter, inhalable, respirable, thoracic


def test_published_table():
    """ISO 7708:1995 / EN 481:1993 (table from memory; respirable median and spread looked up), per cent of airborne."""
    size = np.array([1, 2, 3, 4, 5, 6, 7, 8, 10, 15, 20]) * 1e-6
    assert inhalable(size) * 100 == pytest.approx(
        [97.1, 94.3, 91.8, 89.3, 87.0, 84.9, 82.9, 80.9, 77.4, 70.3, 65.1], abs=0.06
    )
    assert thoracic(size) * 100 == pytest.approx(
        [97.1, 94.3, 91.7, 89.0, 85.4, 80.5, 74.2, 66.6, 50.0, 18.7, 5.9], abs=0.06
    )
    assert respirable(size) * 100 == pytest.approx(
        [97.1, 91.4, 73.9, 50.0, 30.0, 16.8, 9.0, 4.8, 1.3, 0.1, 0.0], abs=0.06
    )


def test_aerodynamic_diameter():
    """Definition: a 5 µm sphere of 2250 kg/m³ settles like 7.5 µm of water density."""
    assert aerodynamic_diameter(diameter=5e-6, particle_density=2250) == pytest.approx(7.5e-6)


def test_shares_on_the_sheet():
    """ISO 7708: by the published table a powder of 10 µm water-density spheres is 77.4 % inhalable, 50.0 % thoracic, 1.3 %
    respirable; the convention ends at 100 µm, and what is coarser counts for nothing."""
    from psdflow import Duty, Material, SizeDistribution, assess

    duty = Duty(name="d", fluid={"gas": "air", "temperature": 293.15, "pressure": 1.013e5}, velocity=0.1)
    drops = Material(name="drops", particle_density=1000, sphericity=1.0)
    edges = np.array([9.99e-6, 10.01e-6, 149e-6, 151e-6])
    powder = SizeDistribution.of(edges, [0.4, 0.0, 0.6], measured_by="laser", quantity="volume")
    found = assess(powder, drops, duty, draws=0)
    for key, share in (("inhalable", 0.774), ("thoracic", 0.500), ("respirable", 0.013)):
        assert float(found[f"{key}_share"]) == pytest.approx(0.4 * share, abs=4e-4), key
