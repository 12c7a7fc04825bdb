"""Words of the trade in English, German, French and Spanish, as they stand over columns and beside fields.

All patterns are matched on `numerals.plain` text: lower case, no accents, ``um`` for micrometre.
"""

import re
from functools import lru_cache
from typing import Literal, NamedTuple

from psdflow.reports.numerals import plain

Role = Literal["mass", "share", "under", "over", "gross", "tare"]


def _words(*patterns: str) -> re.Pattern[str]:
    return re.compile("|".join(rf"(?<![a-z])(?:{p})(?![a-z])" for p in patterns))


SIZE = _words(
    r"sizes?|diameters?|apertures?|openings?|sieves?|screens?|mesh(?: size| width)?|grain|particles?|class(?:es)?|bins?|channels?",
    r"edges?|bounds?|boundar(?:y|ies)|limits?",
    r"sieb\w*|masch\w*|korn\w*|partikel\w*|teilchen\w*|klassen?\w*|durchmesser|\w*grenzen?|grosse|groesse",
    r"ouvertures?|mailles?|tamis|tailles?|diametres?|classes?|bornes?",
    r"luz(?: de malla)?|mallas?|tamiz|tamices|aberturas?|tamanos?|diametros?|clases?",
    r"astm.*|us sieve.*|u\.s\..*",
)
_SYMBOL = re.compile(r"(?:x|d|xo|xu|dp)(?= ?[,/(\[]|$)")
# "To (µm)" and "Klasse bis [µm]" name an edge; "aperture to ISO 3310" and "taille de particule" don't.
_TO = r"(?:^|(?:size|class|classe|clase|klasse|korngrosse|taille|tamano|grain) )(?:to|bis|hasta|jusqu'?a|a)(?= ?[\[(,/]|$)"
_FROM = r"(?:^|(?:size|class|classe|clase|klasse|korngrosse|taille|tamano|grain) )(?:from|von|desde|de)(?= ?[\[(,/]|$)"
UPPER = re.compile(
    _words(
        r"upper|max(?:imum)?|higher|obere?r?|ober\w*|\w*obergrenzen?|superieure?s?|sup\.?|superior|xo|passing|passant|pasante|durchgang",
        r"finer than|less than|smaller than|below|under(?:size)?|kleiner(?: als)?|unter|inferieure? a|menor que",
    ).pattern
    + "|"
    + _TO
    + "|<"
)
LOWER = re.compile(
    _words(
        r"lower|min(?:imum)?|untere?r?|\w*untergrenzen?|inferieure?s?|inf\.?|inferior|xu|retained(?: on)?|ruckstand|refus|retenido",
        r"coarser than|larger than|greater than|above|over(?:size)?|groesser(?: als)?|grosser(?: als)?|uber|superieure? a|mayor que",
    ).pattern
    + "|"
    + _FROM
    + "|>"
)
MID = _words(
    r"mid(?:dle|point|size)?s?|cent(?:er|re|ral)|mean|average|mittel\w*|mittler\w*|moyenn?e?s?|medi[oa]s?|geometric",
    r"klassenmitte\w*|marca de clase",
)
_APERTURE = _words(r"apertures?|openings?|sieves?|mesh|masch\w*|sieb\w*|tamis|ouvertures?|mallas?|luz|tamiz")
CUMULATIVE = _words(
    r"cum\w*\.?|acum\w*\.?|kum\w*\.?|\w*summen?\w*|running total|q3|verteilungssumme|ogive",
)
RETAINED = _words(
    r"retain\w*|residues?|\w*ruckst\w*|\w*rueckst\w*|refus|retenus?|retenues?|reteni\w*|rechaz\w*|ret\.?|r",
)
UNDER = _words(
    r"pass(?:ing|es|ed)?|undersize|under|finer|smaller|below|less|through|\w*durchgang\w*|feiner|kleiner|unter\w*",
    r"passants?|passees?|tamisats?|pasantes?|pasan?|menor(?:es)?|d",
)
OVER = _words(
    r"oversize|over|larger|coarser|greater|above|bigger|grober|groeber|grosser|groesser|uber\w*|ueber\w*|mayor(?:es)?",
)
IN_CLASS = _words(
    r"(?:in|per|each) (?:the )?(?:class|channel|bin|range|interval|fraction)",
    r"frequency|diff(?:erential)?\.?|individual|interval|partiel(?:le)?s?|parcial(?:es)?|klassenanteil\w*|dq3|histogram\w*",
    r"by class|par classe|por clase|je klasse|pro klasse|between sieves",
)
PORTION = _words(
    r"share|proportion|content|fractions?|amount|\w*anteile?\w*|fraktion\w*|haufigkeit\w*|porcion|q3|dq|volume|vol\.?",
)
MASS = _words(r"mass|weight|wt\.?|masse|\w*gewicht\w*|auswaage|poids|peso|masa|net|netto|nette|neto|neta")
GROSS = _words(
    r"gross|brutto\w*|bruta?s?|brutes?|bruto",
    r"(?:sieve|container|dish|pan|tare) ?\+.*",
    r"with (?:sieve|container|tare).*",
)
CONTAINER = re.compile(r"(?:^|[_\s\-])cont(?:ainer)?s?[a-z]?(?![a-z])")
TARE = _words(r"tares?|tara|empty.*|leer\w*|vides?|vacios?|vacias?")
COUNT = _words(r"counts?|number of (?:particles|grains|drops)|particle number|anzahl|nombre|numero de particulas")
UNUSED = _words(
    r"spec\w*|targets?|toler\w*|soll\w*|grenzwert\w*|limits?|limites?|min\.?|max\.?|minimum|maximum|remarks?|comments?|bemerkung\w*|notes?",
    r"observa\w*|deviation|std\.?(?: dev\.?)?|sd|errors?|cv|rsd|density|dichte\w*|densite|densidad",
)
AVERAGE = _words(r"average|mean|mittel(?:wert)?|moyenne|media|promedio|avg\.?")
REPEAT = re.compile(
    r"(.*?)[\s_\-(,]*(?<![a-z])(?:run|reading|repeat|rep|replicate|messung|wiederholung|mesure|repetition|medicion|repeticion)"
    r"[\s_\-.#]*(\d{1,3}|[a-e])\)?"
)
PAN = _words(
    r"(?:collecting |bottom |sieve )?pan|(?:bottom |sieve )?receiver|bottom|base|(?:bottom )?tray|collector|fines|remainder",
    r"siebboden|boden|bodenschale|\w*auffang\w*|schale|rest",
    r"fond(?: de tamis)?|receveur|fondo|bandeja|ciego|colector|recipiente|cazoleta|charola",
)
TOTAL = _words(r"totals?|sum|summe|gesamt\w*|somme|totaux|suma|totales", r"sum of .*|total .*")
LOSS = _words(
    r"loss(?:es)?|lost|\w*verlust\w*|pertes?|perdidas?|gain|difference|differenz|ecart|diferencia",
    r"(?:mass|weight|sieve) loss",
)
INPUT_MASS = _words(
    r"(?:mass |weight |charge |sample )?weighed in|einwaage|initial (?:dry )?(?:mass|weight)|(?:total )?(?:dry )?sample (?:mass|weight)",
    r"(?:mass|weight) of (?:the )?sample|charge(?: mass| weight)?|prise d'essai|(?:masse|poids) initiale?|(?:masa|peso) inicial|probenmasse|probemasse",
    r"test portion|(?:mass|weight) before(?: sieving)?|total dry (?:mass|weight)|charge weighed.*",
)
STATISTIC = re.compile(
    r"(?:[dx] ?[\[(_]? ?(?:\d\d|0[.,]\d{1,2}|[1-4] ?[.,] ?[0-3])(?!\d) ?[\])]?.*|(?:mean|median|mode|span|average|std|standard deviation|specific surface|mittel\w*|median\w*|"
    r"moyenne|mediane|media|mediana|moda|uniformity|obscuration|residual|fit|sauter|skewness|kurtosis|surface|spezifische|surface specifique)(?![a-z]).*)"
)
# Words that mean sieving wherever they stand, and words of the trade that a cumulative laser table may use, too.
SIEVE = _words(
    r"sieve\w*|siev\w*|screen(?:s|ing)?|mesh|sieb\w*|masch\w*|tamis\w*|tamiz\w*|tamices|luz de malla|mallas?|astm e ?11|iso 3310.*|auswaage",
)
RETAINED_OR_PASSING = _words(
    r"retained|passing|\w*ruckstand\w*|\w*rueckstand\w*|\w*durchgang\w*|refus|passants?|reteni\w*|pasantes?|pasa",
)
LASER = _words(r"laser\w*|diffraction|\w*beugung\w*|difraccion|diffraktion\w*|light scattering|iso 13320.*|obscuration")
VOLUME = _words(r"volume|vol\.?|volumen\w*|channels?")
LOT = _words(
    r"lot(?:s)?|lot (?:no|number|nr|id)\.?|batch\w*|charge(?:n?[\s-]?(?:nr|no|nummer)\.?)?|los(?:nummer|-nr\.?)?|lote|partida|numero de lote|n° de lot|lot n°"
)
SAMPLE = _words(
    r"samples?(?: name| id| no\.?| number)?|probe(?:n?name|nbezeichnung)?|echantillons?|muestras?|specimens?|material|product|produkt|produit|producto"
)
NAMES = _words(
    r"date|datum|fecha|jour|day|method\w*|verfahren|metodo|methode|supplier|lieferant|fournisseur|proveedor|laborator\w*|labor|laboratoire|operator|prufer|pruefer|operateur|operador"
    r"|report|bericht|rapport|informe|customer|kunde|client|cliente|standard|norm|norme|norma|instrument|dispersion|duration|siebdauer|duree|duracion|time|zeit|page|seite"
)
BASIS: dict[Literal["mass", "volume", "number", "area"], re.Pattern[str]] = {
    "number": _words(
        r"number (?:based|basis|weighted|distribution|frequency|percent|fraction|share|%)|number[ -]?%|%[ -]?(?:by )?number|number in .*|by number|q0|anzahl\w*|en nombre|en numero|numerique|counts?",
        r"number",
    ),
    "area": _words(
        r"area|surface (?:area|based|basis|weighted|distribution|%)|%[ -]?surface|by surface|q2|flachen\w*|flaechen\w*|en surface|superficie|surface"
    ),
    "volume": _words(r"volume\w*|vol\.?|volumen\w*|volumique"),
    "mass": MASS,
}
_LENGTH = re.compile(
    r"(?<![a-z0-9.])(?:(um|micr[oa]\w*|mikro\w*|nm|nano\w*|mm|mill?imet\w*|cm|inch(?:es)?|zoll|phi)(?![a-z])|[\[(](in|m|u)\.?[\])])"
)
_LENGTH_SUFFIX = re.compile(r"_(um|mm|nm)(?![a-z])")
_MASS = re.compile(r"(?<![a-z0-9])(mg|kg|gr|g|grams?|gramm|grammes?|gramos)(?![a-z0-9/°])")
_PERCENT = re.compile(r"%|(?<![a-z])(?:percent\w*|prozent|pct|pourcent\w*|porcent\w*|por ciento)(?![a-z])")
_FRACTION = re.compile(
    r"[\[(] ?(?:-|1|0 ?(?:-|\.\.|to|bis) ?1) ?[\])]|(?<![a-z])(?:fraction of 1|0-1|decimal fraction)(?![a-z])"
)


class Heading(NamedTuple):
    """What the words over a column say; every field may be empty."""

    text: str
    size: bool
    edge: str  # "upper", "lower", "mid" or ""
    role: str  # a Role, "retained" (in class or cumulative), "cumulative" (either way) or ""
    unit: str  # "um", …, "g", …, "%", "1" (fraction) or ""
    unused: bool


@lru_cache(maxsize=2048)
def heading(raw: str) -> Heading:
    """Read a column's header text."""
    text = plain(raw).replace("\n", " ")
    if not text:
        return Heading("", False, "", "", "", False)
    length, mass = _LENGTH.search(text) or _LENGTH_SUFFIX.search(text), _MASS.search(text)
    percent, fraction = _PERCENT.search(text), _FRACTION.search(text)
    role = _role(text, bool(mass), bool(percent))
    is_size = (
        not percent and not mass and bool(length or _SYMBOL.match(text) or (SIZE.search(text) and role in ("", "edge")))
    )
    if is_size or (length and not percent and not mass):
        return Heading(text, True, _edge(text), "", _length_unit(length), False)
    unit = "%" if percent else (_mass_unit(mass[1]) if mass else ("1" if fraction else ""))
    unused = bool(UNUSED.search(text)) and not mass
    return Heading(text, False, "", "" if role == "edge" else role, unit, unused)


def _length_unit(match: re.Match[str] | None) -> str:
    if match is None:
        return ""
    word = next(g for g in match.groups() if g)
    for start, unit in (
        ("um", "um"),
        ("u", "um"),
        ("mic", "um"),
        ("mik", "um"),
        ("n", "nm"),
        ("mm", "mm"),
        ("mil", "mm"),
        ("cm", "cm"),
    ):
        if word.startswith(start):
            return unit
    return {"phi": "phi", "m": "m"}.get(word, "in")


def _mass_unit(word: str) -> str:
    return word if word in ("mg", "kg") else "g"


def _edge(text: str) -> str:
    upper, lower = UPPER.search(text), LOWER.search(text)
    if upper and lower:
        # "superieure a" is both a word for an upper edge and one for "over": the longer match is meant.
        lengths = upper.end() - upper.start(), lower.end() - lower.start()
        return "" if lengths[0] == lengths[1] else ("upper" if lengths[0] > lengths[1] else "lower")
    if upper or lower:
        return "upper" if upper else "lower"
    return "mid" if MID.search(text) and not _APERTURE.search(text) else ""


def _role(text: str, mass: bool, percent: bool) -> str:
    letters = text.split("[")[0].split("(")[0].strip(" ,%")
    if TARE.search(text):
        return "tare"
    if GROSS.search(text) or (mass and CONTAINER.search(text)):
        return "gross"
    if IN_CLASS.search(text):
        return "share" if not mass else "mass"
    if (
        not percent
        and not mass
        and (letters in ("x", "d", "xo", "xu") or re.search(r"(?<![a-z])(?:edge|bound|grenze)", text))
    ):
        return "edge"
    cumulative, retained = CUMULATIVE.search(text), RETAINED.search(text)
    under, over = UNDER.search(text), OVER.search(text)
    if retained and under:
        return "mass" if mass else "share"  # passing one sieve, retained on the next
    if retained:
        return "over" if cumulative and letters != "q3" else ("mass" if mass else "retained")
    if under and over:
        return "cumulative"
    if under:
        return "under"
    if over:
        return "over"
    if cumulative and "q3" not in text.split():
        return "cumulative"
    if COUNT.search(text) or mass or (MASS.search(text) and not percent and not PORTION.search(text)):
        return "mass"
    return ""


_STRIP = [
    UNDER, OVER, CUMULATIVE, RETAINED, IN_CLASS, PORTION, MASS, GROSS, CONTAINER, TARE, COUNT, SIZE, _LENGTH, _LENGTH_SUFFIX, _MASS, _PERCENT, _FRACTION,
    BASIS["number"], BASIS["area"], BASIS["volume"], re.compile(r"(?<![a-z])(?:than|of|the|by|on|in|per|total|de|la|le|en|der|des|im|auf|and|q3|dq3|finer|each|this)(?![a-z])"),
]  # fmt: skip


@lru_cache(maxsize=2048)
def name_left(raw: str) -> str:
    """What remains of a header without units and quantity words: a sample's name, or nothing."""
    text = plain(raw)
    bare = re.sub(r"\[[^\]]*\]|\((?:[^()]{0,12})\)", " ", raw)
    if not any(pattern.search(plain(bare)) for pattern in _STRIP):
        return bare.strip(" ,;:-_")
    kept = []
    for word in re.split(r"[\s,;:|/]+|(?<=\w)[\[(]", raw):
        bare_word = plain(word).strip("[]().")
        if bare_word and re.search(r"\w", bare_word) and not any(p.search(bare_word) for p in _STRIP):
            kept.append(word.strip("[]()"))
    return " ".join(kept).strip(" -_") if text else ""
