"""Standard enthalpies of formation at 298.15 K of common gas species, with their uncertainty (95 %).

B. Ruscic, D.H. Bross, Active Thermochemical Tables (ATcT) values based on version 1.112 of the Thermochemical Network,
Argonne National Laboratory 2013, https://atct.anl.gov; the method: B. Ruscic et al., J. Phys. Chem. A 108 (2004) 9979,
doi:10.1021/jp047912y. Later versions moved these by less than their uncertainties, most by less than 0.1 kJ/mol (from
memory). Older tables differ: OH was 38.99 (NIST-JANAF 1998) or 39.35 kJ/mol, CH2O -115.90, HO2 2.09, NO 90.29.

A species is looked up by its name and its atoms both: a name alone may be anybody's, atoms alone an isomer's. CH2 is the
triplet ground state.
"""

from collections.abc import Mapping
from functools import cache

from ..mechanism.elements import ATOMIC_MASS, parse_formula
from ..mechanism.model import Species

_KJ_PER_MOL = """
H 217.998 0.000, O 249.229 0.002, N 472.435 0.024, C 716.873 0.057, F 79.374 0.057, Cl 121.302 0.002, Br 111.852 0.056,
I 106.757 0.002, H2 0 0, O2 0 0, N2 0 0, F2 0 0, Cl2 0 0, He 0 0, Ar 0 0, Br2 30.880 0.120, I2 62.417 0.004,
OH 37.501 0.027, H2O -241.822 0.027, HO2 12.270 0.170, H2O2 -135.442 0.064, O3 141.749 0.040, NO 91.089 0.064,
NO2 34.017 0.064, N2O 82.574 0.097, NO3 74.090 0.190, HNO 106.920 0.110, HONO -78.701 0.079, HNO3 -134.160 0.180,
NH 358.790 0.170, NH2 186.050 0.150, NH3 -45.558 0.030, CN 439.970 0.150, HCN 129.291 0.095, HNCO -119.050 0.370,
NCO 127.360 0.390, CO -110.525 0.026, CO2 -393.474 0.015, CH 596.170 0.130, CH2 391.460 0.140, CH3 146.494 0.081,
CH4 -74.534 0.057, HCO 41.830 0.110, CH2O -109.160 0.110, CH2OH -16.100 0.440, CH3O 21.850 0.360, CH3OH -200.700 0.180,
C2H 567.910 0.170, C2H2 228.320 0.150, C2H3 297.270 0.470, C2H4 52.560 0.150, C2H5 119.930 0.370, C2H6 -83.780 0.170,
C3H8 -104.390 0.290, CH3CHO -165.370 0.320, CH2CO -48.570 0.150, C2H5OH -234.570 0.220, C6H6 83.180 0.260,
CH3O2 12.060 0.900, HCl -92.173 0.006, HBr -35.850 0.150, HI 26.470 0.036, HF -272.711 0.057, ClO 101.707 0.035
"""
_OTHER_NAMES = {"HO": "OH", "HOO": "HO2", "HOOH": "H2O2", "HNO2": "HONO", "H2CO": "CH2O", "HCHO": "CH2O", "OCH": "HCO",
                "CH3CH2OH": "C2H5OH", "CH3OO": "CH3O2", "CH2(T)": "CH2", "3CH2": "CH2"}

Reference = tuple[dict[str, int], float, float]


@cache
def _table() -> Mapping[str, Reference]:
    rows = [row.split() for row in _KJ_PER_MOL.split(",")]
    known = {name.upper(): (parse_formula(name, ATOMIC_MASS), 1e3 * float(H), 1e3 * float(u)) for name, H, u in rows}
    return known | {other.upper(): known[name.upper()] for other, name in _OTHER_NAMES.items()}


def reference(species: Species) -> tuple[float, float] | None:
    """ΔfH°(298.15 K) and its uncertainty [J/mol]; None for a species that the table does not have."""
    found = _table().get(species.name.upper())
    if found is None or species.charge or dict(species.composition) != found[0]:
        return None
    return found[1], found[2]
