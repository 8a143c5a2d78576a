"""Stiffness, density and strength of common structural materials, told by their names.

Values are from memory of the standards named with each (SI; mean stiffness, characteristic
strength).  Grades come first; a name that only says "steel" or "concrete" gets the ordinary
value and is reported as assumed.  The job file overrides any of it.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping
from typing import NamedTuple

GPA, MPA, PSI = 1e9, 1e6, 6894.757293168361


class Known(NamedTuple):
    """What a name tells: moduli in Pa, density in kg/m³, strengths by symbol in Pa.

    ``assumed`` says what was taken for granted, "" where the name states the grade.
    """

    grade: str
    category: str
    elastic_modulus: float
    shear_modulus: float
    density: float
    thermal_expansion: float
    strength: Mapping[str, float]
    source: str
    assumed: str = ""


def known_material(name: str, category: str = "") -> Known | None:
    """Return what the name of a material tells, or None.

    ``category`` is what the file says beside the name ("steel", "Holz", …), used where the
    name alone could be a grade of concrete or of timber.
    """
    text = f" {name} ".replace("_", " ")
    kind = kind_of(name) or kind_of(category)
    for reader in _READERS:
        found = reader(text, kind)
        if found is not None:
            return found
    return None


def kind_of(text: str) -> str:
    """Return "steel", "concrete", "timber", another kind in the table, or "" for a name."""
    words = text.lower()
    for kind, pattern in _KINDS:
        if re.search(pattern, words):
            return kind
    return ""


_KINDS = (
    (
        "stainless",
        r"stainless|edelstahl|nichtrostend|inox|rostfri|\b1\.4\d{3}\b|\bsus ?\d{3}"
        r"|\baisi ?[34]\d\d",
    ),
    ("aluminium", r"alumin|alumíni|alu\b"),
    (
        "lightweight concrete",
        r"leichtbeton|lightweight concrete|light-?weight aggregate|béton léger|\blc ?\d",
    ),
    ("masonry", r"masonry|mauerwerk|brick|ziegel|kalksand|blockwork|porenbeton|aerated|gasbeton"),
    ("glulam", r"glulam|glued.?lam|brettschicht|\bbsh\b|lamell|limtr|\bgl ?\d\d|glue-?lam"),
    ("lvl", r"\blvl\b|laminated veneer|furnierschicht"),
    (
        "hardwood",
        r"hardwood|laubholz|\boak\b|eiche|beech|buche|chêne|\bd ?(?:18|24|30|35|40|50|60|70)\b",
    ),
    (
        "timber",
        r"timber|wood|holz|\bbois\b|legno|madera|madeira|spruce|fichte|\bpine\b|kiefer|\bfir\b"
        r"|tanne|larch|lärche|\bkvh\b|lumber|houten|\bhout\b|träd?\b|\btre\b|drewno|softwood",
    ),
    (
        "concrete",
        r"concrete|beton|béton|hormig|calcestruzzo|cls\b|concreto|betong|betoni|コンクリート|混凝土",
    ),
    (
        "steel",
        r"steel|stahl|\bacier\b|acciaio|\bacero\b|\baço\b|\bstaal\b|\bstål\b|teräs|\bstal\b|ocel"
        r"|鋼|钢|\bmetal\b",
    ),
)


def _steel(grade: str, fy: float, fu: float, source: str, modulus: float = 210.0) -> Known:
    strength = {"fy": fy * MPA, "fu": fu * MPA}
    e = modulus * GPA
    return Known(grade, "steel", e, e / 2.6, 7850.0, 12e-6, strength, source)


_EN_STEEL = {  # EN 1993-1-1, table 3.1, up to 40 mm: yield and ultimate strength, MPa
    235: 360.0, 275: 430.0, 355: 490.0, 420: 520.0, 450: 550.0, 460: 540.0, 690: 770.0,
}  # fmt: skip
_ASTM = {  # ASTM grades as in AISC 360: yield and ultimate strength, ksi
    "a36": (36, 58), "a992": (50, 65), "a572": (50, 65), "a529": (50, 65), "a588": (50, 70),
    "a913": (50, 65), "a500": (46, 58), "a1085": (50, 65), "a53": (35, 60), "a501": (36, 58),
}  # fmt: skip


def _en_steel(text: str, kind: str) -> Known | None:
    match = re.search(r"\b[SQ] ?(\d{3})(?!\d)", text, re.IGNORECASE)
    if match is None or kind in ("concrete", "timber", "stainless"):
        return None
    fy = int(match.group(1))
    if match.group(0)[0].upper() == "Q" and fy in (235, 345, 355, 390, 420, 460):
        ultimate = {235: 370.0, 345: 470.0, 355: 470.0, 390: 490.0, 420: 520.0, 460: 550.0}[fy]
        return _steel(f"Q{fy}", fy, ultimate, "GB 50017", modulus=206.0)
    if fy in _EN_STEEL and match.group(0)[0].upper() == "S":
        return _steel(f"S{fy}", fy, _EN_STEEL[fy], "EN 1993-1-1, 3.2.6 and table 3.1")
    return None


def _old_steel(text: str, kind: str) -> Known | None:
    """Names of grades before EN 10025: St 37, Fe 360 and the like."""
    match = re.search(r"\b(St|Fe) ?(\d{2,3})(?!\d)", text, re.IGNORECASE)
    if match is None:
        return None
    old = {37: 235, 360: 235, 44: 275, 430: 275, 52: 355, 510: 355}
    fy = old.get(int(match.group(2)))
    if fy is None:
        return None
    return _steel(match.group(0).strip(), fy, _EN_STEEL[fy], f"as S{fy}, EN 1993-1-1, table 3.1")


def _astm_steel(text: str, kind: str) -> Known | None:
    match = re.search(r"\b(a\d{2,4})\b(?:.{0,12}?gr(?:ade)?\.? ?(\w+))?", text, re.IGNORECASE)
    if match is None or match.group(1).lower() not in _ASTM:
        return None
    fy, fu = _ASTM[match.group(1).lower()]
    grade = match.group(2) or ""
    if grade.isdigit() and 36 <= int(grade) <= 80:
        fy, fu = int(grade), max(fu, int(grade) + 15)
    elif grade.lower() == "c" and match.group(1).lower() == "a500":
        fy, fu = 50, 62
    ksi = 1000.0 * PSI
    strength = {"fy": fy * ksi, "fu": fu * ksi}
    e = 29e6 * PSI
    name = f"ASTM {match.group(1).upper()}"
    return Known(name, "steel", e, 11.2e6 * PSI, 7850.0, 11.7e-6, strength, "AISC 360")


def _other_steel(text: str, kind: str) -> Known | None:
    """Japanese grades, and a yield strength in MPa written into the name."""
    match = re.search(r"\b(SS|SN|SM|STKR|BCR|BCP)(\d{3})", text)
    if match:
        fu = float(match.group(2))
        fy = {400.0: 235.0, 490.0: 325.0, 295.0: 295.0, 325.0: 325.0}.get(fu, 235.0)
        return _steel(match.group(0), fy, max(fu, 400.0), "JIS G 3136", modulus=205.0)
    if kind == "steel":
        match = re.search(r"(\d{3}) ?MPa\b|\bgrade ?(\d{3})\b", text, re.IGNORECASE)
        if match:
            fy = float(match.group(1) or match.group(2))
            if 200.0 <= fy <= 700.0:
                found = _steel(f"fy {fy:g} MPa", fy, 1.25 * fy, "EN 1993-1-1, 3.2.6")
                return found._replace(assumed="ultimate strength as 1.25 times the yield strength")
    return None


# EN 1992-1-1, table 3.1: mean modulus in GPa by characteristic cylinder strength in MPa.
_ECM = {
    12: 27, 16: 29, 20: 30, 25: 31, 28: 32, 30: 33, 32: 33, 35: 34, 40: 35, 45: 36, 50: 37,
    55: 38, 60: 39, 70: 41, 80: 42, 90: 44,
}  # fmt: skip


def concrete(fck: float, grade: str, assumed: str = "") -> Known:
    """Concrete of a cylinder strength in MPa: EN 1992-1-1, table 3.1, Ecm = 22 (fcm/10)^0.3 GPa."""
    modulus = _ECM.get(round(fck)) or 22.0 * ((fck + 8.0) / 10.0) ** 0.3
    e = float(modulus) * GPA
    strength = {"fck": fck * MPA}
    source = "EN 1992-1-1, table 3.1; 3.1.3"
    return Known(grade, "concrete", e, e / 2.4, 2500.0, 10e-6, strength, source, assumed)


def _en_concrete(text: str, kind: str) -> Known | None:
    match = re.search(r"\b(LC|C) ?(\d{2,3}) ?[/_-] ?(\d{2,3})\b", text, re.IGNORECASE)
    if match:
        fck, cube = float(match.group(2)), float(match.group(3))
        if not 1.05 <= cube / fck <= 1.4:
            return None
        found = concrete(fck, match.group(0).strip())
        if match.group(1).upper() == "C":
            return found
        # EN 1992-1-1, 11.3.2: (rho/2200)², with rho of class 1.8 unless stated.
        e = found.elastic_modulus * (1800.0 / 2200.0) ** 2
        return found._replace(
            elastic_modulus=e,
            shear_modulus=e / 2.4,
            density=1900.0,
            assumed="density class 1.8 of lightweight concrete",
        )
    if kind != "concrete":
        return None
    match = re.search(r"\bf'?c?k? ?=? ?(\d{2}) ?(?:MPa|N/mm)|\b(?:C|B|M) ?(\d{2})\b|"
                      r"\b(\d{2}) ?(?:MPa|N/mm)", text, re.IGNORECASE)  # fmt: skip
    if match:
        fck = float(next(g for g in match.groups() if g))
        return concrete(fck, match.group(0).strip())
    match = re.search(r"\b(\d{1,2}),?(\d{3}) ?psi\b|\b(\d{1,2}(?:\.\d)?) ?ksi\b", text,
                      re.IGNORECASE)  # fmt: skip
    if match:
        psi = float(match.group(3)) * 1e3 if match.group(3) else float(
            match.group(1) + match.group(2)
        )  # fmt: skip
        e = 57000.0 * psi**0.5 * PSI
        strength = {"fc": psi * PSI, "fck": psi * PSI}
        source = "ACI 318-19, 19.2.2.1(b)"
        grade = match.group(0).strip()
        return Known(grade, "concrete", e, e / 2.4, 2400.0, 10e-6, strength, source)
    return None


# EN 338:2016, tables 1 and 3: bending strength in MPa: E0,mean GPa, mean density, shear strength
# and compressive strength across the grain, MPa.
_SOFTWOOD = {
    14: (7.0, 350, 3.0, 2.0), 16: (8.0, 370, 3.2, 2.2), 18: (9.0, 380, 3.4, 2.2),
    20: (9.5, 400, 3.6, 2.3), 22: (10.0, 410, 3.8, 2.4), 24: (11.0, 420, 4.0, 2.5),
    27: (11.5, 430, 4.0, 2.5), 30: (12.0, 460, 4.0, 2.7), 35: (13.0, 470, 4.0, 2.7),
    40: (14.0, 480, 4.0, 2.8), 45: (15.0, 490, 4.0, 2.9), 50: (16.0, 520, 4.0, 3.0),
}  # fmt: skip
_HARDWOOD = {
    18: (9.5, 570, 3.5, 4.8), 24: (10.0, 580, 3.7, 4.9), 27: (10.5, 610, 3.8, 5.1),
    30: (11.0, 640, 3.9, 5.3), 35: (12.0, 650, 4.1, 5.4), 40: (13.0, 660, 4.2, 5.5),
    45: (13.5, 700, 4.4, 5.8), 50: (14.0, 740, 4.5, 6.2), 55: (15.5, 790, 4.7, 6.6),
    60: (17.0, 840, 4.8, 10.5), 65: (18.5, 900, 5.0, 11.3), 70: (20.0, 960, 5.0, 12.0),
}  # fmt: skip
_GLULAM_ACROSS = 2.5  # EN 14080, table 5: f_c,90,g,k, MPa, of every class
# EN 14080:2013, tables 4 and 5: E0,mean GPa and mean density.
_GLULAM = {
    "20h": (8.4, 370), "22h": (10.5, 410), "24h": (11.5, 420), "26h": (12.1, 445),
    "28h": (12.6, 460), "30h": (13.6, 480), "32h": (14.2, 490),
    "20c": (10.4, 390), "22c": (10.4, 390), "24c": (11.0, 400), "26c": (12.0, 420),
    "28c": (12.5, 420), "30c": (13.0, 430), "32c": (13.5, 440),
}  # fmt: skip


def _timber_of(
    grade: str,
    fmk: float,
    row: tuple[float, float, float, float],
    source: str,
    *,
    category: str = "timber",
    assumed: str = "",
) -> Known:
    """``row``: E0,mean in GPa, density, shear strength, strength across the grain; 0: unknown."""
    e, density, fvk, across = row
    strength = {"fmk": fmk * MPA, "fvk": fvk * MPA}
    if across:
        strength["fc90k"] = across * MPA
    return Known(grade, category, e * GPA, e * GPA / 16.0, density, 5e-6, strength, source, assumed)


def _glulam_of(key: str, assumed: str) -> Known:
    e, density = _GLULAM[key]
    found = _timber_of(
        f"GL{key}", float(key[:2]), (e, density, 3.5, _GLULAM_ACROSS),
        "EN 14080, tables 4 and 5", category="glulam", assumed=assumed,
    )  # fmt: skip
    return found._replace(shear_modulus=0.65 * GPA)


def _glulam(text: str, kind: str) -> Known | None:
    match = re.search(r"\bGL ?(\d\d) ?([hc])?\b", text, re.IGNORECASE)
    if match is None:
        return None
    key = match.group(1) + (match.group(2) or "h").lower()
    if key not in _GLULAM:
        return None
    return _glulam_of(key, "" if match.group(2) else "homogeneous glulam (h)")


def _sawn(text: str, kind: str) -> Known | None:
    match = re.search(r"\b([CD]) ?(\d\d)\b(?! ?[/-] ?\d)", text)
    if match is None or kind in ("concrete", "lightweight concrete", "steel"):
        return None
    grade = int(match.group(2))
    table = _SOFTWOOD if match.group(1) == "C" else _HARDWOOD
    # C25, C30 and so on may be concrete: without a word for timber, only what is no concrete.
    unmistakable = match.group(1) == "D" or grade in (14, 18, 22, 24, 27)
    if grade not in table or not (kind in ("timber", "hardwood") or unmistakable):
        return None
    category = "timber" if match.group(1) == "C" else "hardwood"
    return _timber_of(
        f"{match.group(1)}{grade}", grade, table[grade], "EN 338, tables 1 and 3",
        category=category,
    )  # fmt: skip


def _german_timber(text: str, kind: str) -> Known | None:
    """S10 and S13 of DIN 4074-1, as EN 1912 assigns them."""
    match = re.search(r"\bS ?(7|10|13)\b", text)
    if match is None or kind not in ("timber", "glulam"):
        return None
    grade = {"7": 18, "10": 24, "13": 30}[match.group(1)]
    name = f"S{match.group(1)} (C{grade})"
    return _timber_of(name, grade, _SOFTWOOD[grade], "EN 1912; EN 338, table 1")


def _ordinary(text: str, kind: str) -> Known | None:
    """A kind without a grade: the ordinary one, said to be assumed."""
    if kind == "steel":
        found = _steel("steel", 235.0, 360.0, "EN 1993-1-1, 3.2.6")
        return found._replace(assumed="steel of 210 GPa, strength of S235")
    if kind == "stainless":  # a category of its own: the clauses for carbon steel do not hold
        e = 200.0 * GPA
        strength = {"fy": 210.0 * MPA, "fu": 520.0 * MPA}
        return Known("stainless steel", "stainless", e, e / 2.6, 7900.0, 16e-6, strength,
                     "EN 1993-1-4, 2.1.3", "strength of 1.4301")  # fmt: skip
    if kind == "aluminium":
        return Known("aluminium", "", 70.0 * GPA, 27.0 * GPA, 2700.0, 23e-6, {},
                     "EN 1999-1-1, 3.2.5")  # fmt: skip
    if kind == "concrete":
        return concrete(25.0, "C25/30", "concrete of class C25/30")
    if kind == "glulam":
        return _glulam_of("24h", "glulam of GL24h")
    if kind == "lvl":  # its strength across the grain depends on the product
        return _timber_of("LVL", 44, (13.8, 510, 4.1, 0.0), "EN 14374", category="lvl",
                          assumed="LVL of 13.8 GPa")  # fmt: skip
    if kind == "hardwood":
        return _timber_of("D30", 30, _HARDWOOD[30], "EN 338, table 3", category="hardwood",
                          assumed="hardwood of D30")  # fmt: skip
    if kind == "timber":
        return _timber_of("C24", 24, _SOFTWOOD[24], "EN 338, table 1", assumed="softwood of C24")
    return None


_READERS: tuple[Callable[[str, str], Known | None], ...] = (
    _glulam,
    _en_concrete,
    _german_timber,
    _sawn,
    _en_steel,
    _old_steel,
    _astm_steel,
    _other_steel,
    _ordinary,
)
