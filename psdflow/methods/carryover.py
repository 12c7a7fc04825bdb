"""Methods of psdflow.carryover.

Variables the ranges use: ``diameter`` (mean size of what can be carried, m), ``velocity``, ``bed_diameter``,
``particle_density``. Scatter of an elutriation law on foreign data is a factor of 3 to 10; 0.8 is the standard
deviation of the logarithm that gives a factor of 5 at 95 %.
"""

from psdflow.methods import Method

FOREIGN = 0.8
RANGE_FROM_MEMORY = "range from memory"

# fmt: off
ELUTRIATION: tuple[Method, ...] = (
    Method("zenz-weil-1958", "carryover_flux", "Zenz & Weil 1958", "Zenz & Weil, AIChE J. 4 (1958) 472; constants confirmed on Kunii & Levenspiel 1991, ex. 7.3 and 7.5",
           {"diameter": (20e-6, 150e-6), "velocity": (0.3, 0.7)}, FOREIGN, "looked up", "v",
           f"Often misquoted: constants hold with X in SI only. No terminal velocity in it; {RANGE_FROM_MEMORY}."),
    Method("geldart-1979", "carryover_flux", "Geldart et al. 1979", "Geldart et al., Trans. IChemE 57 (1979) 269; Kunii & Levenspiel 1991, ex. 7.5",
           {"diameter": (60e-6, 350e-6), "velocity": (0.6, 3.0)}, FOREIGN, "looked up", "v", f"Sand and alumina; {RANGE_FROM_MEMORY}."),
    Method("tasirin-geldart-1998", "carryover_flux", "Tasirin & Geldart 1998", "Tasirin & Geldart, Powder Technol. 95 (1998) 240",
           {"diameter": (20e-6, 124e-6), "velocity": (0.2, 0.8)}, FOREIGN, "from memory", "v",
           "Velocity range and upper size looked up; lower size judged. Two memories disagree on which constant is the turbulent one."),
    Method("wen-chen-1982", "carryover_flux", "Wen & Chen 1982", "Wen & Chen, AIChE J. 28 (1982) 117",
           {"bed_diameter": (0.05, 0.9), "velocity": (0.3, 10.0)}, FOREIGN, "from memory", "v", f"Wide data base of groups A and B; {RANGE_FROM_MEMORY}, lower velocity judged."),
    Method("colakyan-levenspiel-1984", "carryover_flux", "Colakyan & Levenspiel 1984", "Colakyan & Levenspiel, Powder Technol. 38 (1984) 223",
           {"diameter": (40e-6, 1e-3), "velocity": (0.9, 3.7)}, FOREIGN, "from memory", "v", "No gas density in it. Velocity range looked up (300 to 1000 µm); used down to 40 µm as judged."),
    Method("wen-hashinger-1960", "carryover_flux", "Wen & Hashinger 1960", "Wen & Hashinger, AIChE J. 6 (1960) 220; Kunii & Levenspiel 1991, ex. 7.5",
           {"diameter": (40e-6, 280e-6), "velocity": (0.2, 1.3)}, FOREIGN, "looked up", "v", f"1.7e-5 is also quoted for 1.52e-5; {RANGE_FROM_MEMORY}."),
    Method("choi-1999", "carryover_flux", "Choi et al. 1999", "Choi et al., Ind. Eng. Chem. Res. 38 (1999) 2491",
           {"diameter": (46e-6, 720e-6), "velocity": (0.3, 7.0), "particle_density": (2400.0, 6200.0), "bed_diameter": (0.06, 1.0)}, FOREIGN, "from memory", "v",
           f"12 to 600 °C, 1 to 32 bar; ignores forces between grains; {RANGE_FROM_MEMORY}. Shown, not combined."),
    Method("baeyens-1992", "carryover_flux", "Baeyens et al. 1992", "Baeyens, Geldart & Wu, Powder Technol. 71 (1992) 71",
           {"velocity": (0.1, 0.7)}, FOREIGN, "from memory", "v", f"Group A and fine powders; {RANGE_FROM_MEMORY}. Shown, not combined."),
    Method("tanaka-1972", "carryover_flux", "Tanaka et al. 1972", "Tanaka et al., J. Chem. Eng. Japan 5 (1972) 51",
           {"diameter": (100e-6, 700e-6), "velocity": (0.9, 2.8)}, FOREIGN, "from memory", "v", f"{RANGE_FROM_MEMORY.capitalize()}. Shown, not combined."),
    Method("merrick-highley-1974", "carryover_flux", "Merrick & Highley 1974", "Merrick & Highley, AIChE Symp. Ser. 70/137 (1974) 366; Kunii & Levenspiel 1991, ex. 7.5",
           {"diameter": (60e-6, 1.4e-3), "velocity": (0.6, 2.4)}, FOREIGN, "looked up", "v", f"Coal ash; grossly high for fines; {RANGE_FROM_MEMORY}. Shown, not combined."),
    Method("yagi-aochi-1955", "carryover_flux", "Yagi & Aochi 1955", "Yagi & Aochi (1955); Kunii & Levenspiel 1991, ex. 7.5",
           {"diameter": (80e-6, 300e-6)}, FOREIGN, "looked up", "v", f"Small columns; {RANGE_FROM_MEMORY}. Shown, not combined."),
    Method("elutriation-mean", "carryover_flux", "geometric mean of the laws in range", "this project's rule (psdflow.carryover.elutriation) over six published laws",
           {}, 0.35, "from memory", "v", "Interval from the laws' spread over the root of their number and a factor of 2 that all share. Below the critical size of Baeyens et al. 1992 the flux is held level."),
)

FREEBOARD: tuple[Method, ...] = (
    Method("zenz-weil-tdh", "tdh", "Zenz & Weil chart, Horio's fit", "Zenz & Weil 1958 as fitted by Horio 1980",
           {"velocity": (0.0, 1.5), "bed_diameter": (0.0, 3.0)}, 0.4, "from memory", "", "Group A; form confirmed by one number looked up. Laws spread by a factor of three."),
    Method("amitin-1968", "tdh", "Amitin et al. 1968", "Amitin et al. (1968); also Chan & Knowlton 1984", {}, 0.4, "looked up", "", "log10 taken; ln is also met."),
    Method("fournol-1973", "tdh", "Fournol et al. 1973", "Fournol et al., Can. J. Chem. Eng. 51 (1973) 401", {"velocity": (0.0, 0.2)}, 0.4, "from memory", "", "Cracking catalyst only."),
    Method("horio-1980-tdh", "tdh", "Horio et al. 1980", "Horio et al. (1980)", {}, 0.4, "from memory", "", "From the bubble at the surface."),
    Method("george-grace-1978", "tdh", "George & Grace 1978", "George & Grace, AIChE Symp. Ser. 74/176 (1978) 67", {}, 0.4, "from memory", "", "From the bubble at the surface."),
    Method("fung-hamdullahpur-1993", "tdh", "Fung & Hamdullahpur 1993", "Fung & Hamdullahpur, Powder Technol. 75 (1993) 105", {}, 0.4, "from memory", "", "From the bubble at the surface."),
    Method("smolders-baeyens-2001", "tdh", "Smolders & Baeyens 2001", "Smolders & Baeyens, Powder Technol. 119 (2001) 269", {}, 0.4, "from memory", "", "From the bubble at the surface."),
)

CYCLONE: tuple[Method, ...] = (
    Method("stairmand-similarity", "cyclone_cut_size", "Stokes number of Stairmand's designs", "Svarovsky; Rhodes 2008, ch. 9", {}, 0.2, "from memory", "",
           "Geometrically similar cyclones below 5 g/m³; worked examples reproduced."),
    Method("barth-1956", "cyclone_cut_size", "Barth 1956", "Barth, Brennst.-Wärme-Kraft 8 (1956) 1; Hoffmann & Stein, ch. 4", {}, 0.25, "looked up", "", "Swirl terms from memory."),
    Method("iozia-leith-1989", "cyclone_cut_size", "Iozia & Leith 1989", "Iozia & Leith, Aerosol Sci. Technol. 10 (1989) 491", {}, 0.25, "from memory", "", "Fitted on cyclones of 0.25 m."),
    Method("lapple-1951", "cyclone_cut_size", "Lapple 1951", "Lapple, Chem. Eng. 58 (1951) 144", {}, 0.3, "looked up", "", "Conservative for modern designs."),
    Method("muschelknautz", "cyclone_cut_size", "Muschelknautz", "Muschelknautz & Trefz, VDI heat atlas; Hoffmann & Stein, ch. 6", {}, 0.25, "from memory", "", "Clean gas in the list; friction of smooth steel."),
    Method("dietz-1981", "loss_rate", "Dietz 1981", "Dietz, AIChE J. 27 (1981) 888", {}, 0.3, "from memory", "", "Re-derived from its three-region balance. Shown, not combined."),
    Method("leith-licht-1972", "loss_rate", "Leith & Licht 1972", "Leith & Licht, AIChE Symp. Ser. 68/126 (1972) 196; Koch & Licht 1977", {}, 0.3, "looked up", "", "Far too high for fines. Shown, not combined."),
    Method("stairmand-euler", "cyclone_pressure_drop", "Euler number of Stairmand's designs", "Svarovsky; Rhodes 2008, ch. 9", {}, 0.3, "from memory", "", "Clean gas."),
    Method("shepherd-lapple-1940", "cyclone_pressure_drop", "Shepherd & Lapple 1940", "Shepherd & Lapple, Ind. Eng. Chem. 32 (1940) 1246", {}, 0.35, "looked up", "", "Clean gas; the constant 16 ranges from 12 to 18."),
    Method("casal-martinez-1983", "cyclone_pressure_drop", "Casal & Martinez-Benet 1983", "Casal & Martinez-Benet, Chem. Eng. 90 (1983) 99", {}, 0.35, "from memory", "", "Clean gas."),
    Method("dirgo-1988", "cyclone_pressure_drop", "Dirgo 1988", "Dirgo (1988); Ramachandran et al. 1991", {}, 0.35, "from memory", "", "Clean gas."),
    Method("kalen-zenz-1974", "cyclone_saltation_ratio", "Kalen & Zenz 1974", "Kalen & Zenz, AIChE Symp. Ser. 70/137 (1974) 388", {}, 0.2, "from memory", "", "Low loading; dimensional. In hot or thin gas it allows more than erosion does."),
    Method("cyclone-grade", "cyclone_efficiency", "grade curve with critical loading", "1/(1+(x50/x)^m): Rhodes 2008 for Stairmand's designs, Dirgo & Leith for Barth; critical loading after Muschelknautz", {}, 0.0, "from memory", "",
           "Dust above the critical loading drops out unclassified; that constant is in doubt."),
)
# fmt: on

OTHER: tuple[Method, ...] = (
    Method(
        "wen-chen-1982-decay",
        "carryover_flux_outlet",
        "Wen & Chen 1982, freeboard",
        "Wen & Chen, AIChE J. 28 (1982) 117; Kunii & Levenspiel 1991, ch. 7",
        {},
        1.0,
        "from memory",
        "",
        "Decay 4 1/m (3.5 to 6.4). The ejected flux is an order of magnitude, very steep in gas density and viscosity.",
    ),
    Method(
        "yang-1983",
        "choking_flux",
        "Yang 1983",
        "Yang, Powder Technol. 35 (1983) 143",
        {},
        0.8,
        "from memory",
        "",
        "Ten times Punwani's: a ceiling, not a prediction.",
    ),
    Method(
        "punwani-1976",
        "choking_flux",
        "Punwani et al. 1976",
        "Punwani et al. (1976); Rhodes 2008, ch. 8",
        {},
        0.8,
        "from memory",
        "",
        "A tenth of Yang's.",
    ),
)

METHODS: tuple[Method, ...] = (*ELUTRIATION, *FREEBOARD, *OTHER, *CYCLONE)
