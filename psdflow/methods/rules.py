"""The stated rule behind each recommended value; the formulas' docstrings say the same."""

RULES: dict[str, str] = {
    "u_mf": "voidage at minimum fluidization and sphericity both measured: Ergun 1952; else in a liquid Wen & Yu 1966; else "
    "d_sv below 100 µm: Baeyens & Geldart 1974; above 500 µm, or over 5 bar: geometric mean of Wen & Yu 1966 and Chitester "
    "1984; else Grace 1982",
    "u_cf": "the rule of u_mf for the d90 size (or the duty's coarse_end), never below u_mf",
    "voidage_mf": "measured; else from the loose bulk density; else Broadhurst & Becker 1975 in its range; else Wen & Yu 1966",
    "group": "each boundary set has one vote in every draw; the most voted letter",
    "u_mb": "Abrahamsen & Geldart 1980, never below u_mf",
    "u_c": "Bi & Grace 1995 (differential pressure); the lines of other authors differ by a factor of two",
    "u_k": "Perales et al. 1990",
    "u_se": "Bi & Grace 1995; the terminal velocity above Ar 4e6",
    "u_tr": "Bi & Fan 1991",
    "u_t": "Haider & Levenspiel 1989 with sphericity, solved implicitly, with slip in gases",
    "bubble_diameter": "Darton et al. 1977, held to 0.8 of the bed and, in group A, to the largest stable bubble",
    "expanded_height": "smooth bed between u_mf and u_mb, two-phase theory above, Richardson & Zaki in liquids",
    "cohesion_risk": "families of indicators, see the README's table",
    "carryover_flux": "geometric mean of the six default laws whose ranges cover velocity, bed and mean carried size; else of "
    "the nearest ones, marked outside",
    "tdh": "Zenz & Weil's chart as Horio fitted it",
    "cyclone_cut_size": "the Stokes number of Stairmand's designs; else Barth 1956",
    "cyclone_pressure_drop": "the Euler number of Stairmand's designs; else Shepherd & Lapple 1940",
}
