"""Methods of the size stage."""

from psdflow.methods import Method

METHODS: tuple[Method, ...] = (
    Method(
        key="iso-9276-2",
        quantity="d32",
        name="ISO 9276-2 moments",
        source="ISO 9276-1:1998 and ISO 9276-2:2014, moment notation",
        note="Share spread evenly in ln(size) inside a class; percentiles log-linear between class edges. Formulas "
        "from memory, checked against worked examples.",
    ),
    Method(
        key="iso-7708",
        quantity="respirable_share",
        name="ISO 7708 respirable convention",
        source="ISO 7708:1995, EN 481:1993: log-normal of median 4.25 µm and geometric s.d. 1.5 times the inhalable "
        "convention, on the aerodynamic diameter",
        ranges={},
        note="The share of the powder that would count as respirable if all of it were airborne; exposure depends on "
        "dustiness and handling.",
    ),
)
