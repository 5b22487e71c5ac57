"""The kinds of requirement, one module each, and the table KINDS."""

from __future__ import annotations

from filtercheck.requirements import attenuation, corner, gain, resonance, ripple
from filtercheck.requirements.kind import Kind

_MODULES = (gain, attenuation, ripple, corner, resonance)

KINDS: dict[str, Kind] = {module.KIND.name: module.KIND for module in _MODULES}
