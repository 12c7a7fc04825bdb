"""Methods of the cohesion stage."""

from psdflow.methods import Method

METHODS: tuple[Method, ...] = (
    Method(
        key="cohesion-families",
        quantity="cohesion_risk",
        name="families of indicators",
        source="this project's rule (psdflow.cohesion.verdict) on the thresholds of Molerus 1982, Geldart, Harnby & "
        "Wong 1984, Jenike 1964 and Geldart et al. 2006",
        note="Screening only: weights and fines limits are judged, thresholds from memory, and no powder with observed "
        "behaviour between 15 and 25 µm was at hand to test it.",
    ),
    Method(
        key="rumpf-rough-spheres",
        quantity="bond_number",
        name="van der Waals force of rough grains",
        source="Hamaker 1937 with Rumpf's hemispherical asperities; closest approach 0.165 nm (Israelachvili)",
        note="Roughness moves the force by decades; a threshold belongs to its force model.",
    ),
)
