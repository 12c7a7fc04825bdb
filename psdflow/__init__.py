"""psdflow: from a size report to fluidization behaviour.

>>> import psdflow
>>> reports = psdflow.read("lot-0412.csv")
>>> material, duty = psdflow.Material.load("alumina.yaml"), psdflow.Duty.load("dryer.yaml")
>>> assessment = psdflow.assess(reports[0].distribution, material, duty)
>>> assessment["u_mf"], assessment.low["u_mf"], assessment.high["u_mf"]
"""

from importlib import import_module
from typing import TYPE_CHECKING, Any

__version__ = "0.1.0"

if TYPE_CHECKING:
    from psdflow.assessment import Assessment
    from psdflow.distribution import SizeDistribution
    from psdflow.duty import Duty
    from psdflow.errors import InputError
    from psdflow.material import Material
    from psdflow.pipeline import assess
    from psdflow.reports import Report, read

# Where each public name lives; they are imported when first used, so that `import psdflow` stays light.
_HOMES = {
    "assess": "psdflow.pipeline",
    "Assessment": "psdflow.assessment",
    "SizeDistribution": "psdflow.distribution",
    "Duty": "psdflow.duty",
    "InputError": "psdflow.errors",
    "Material": "psdflow.material",
    "Report": "psdflow.reports",
    "read": "psdflow.reports",
}

__all__ = [
    "Assessment",
    "Duty",
    "InputError",
    "Material",
    "Report",
    "SizeDistribution",
    "__version__",
    "assess",
    "read",
]


def __getattr__(name: str) -> Any:
    if name not in _HOMES:
        raise AttributeError(f"module 'psdflow' has no attribute {name!r}")
    return getattr(import_module(_HOMES[name]), name)
