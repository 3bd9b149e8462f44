"""The agents of a COD digestion and the dangers of a discharge point, in plain words.

GHS statements are the harmonised set of each pure substance (Regulation (EC)
1272/2008, Annex VI, and safety data sheets that follow it); the sheet of the
lot in hand may differ and decides. First aid is given in general words only.
"""

from __future__ import annotations

from dataclasses import dataclass

DEFERRAL = (
    "This is a reminder, not an instruction to work. The safety data sheet of the very lot, your chemical "
    "hygiene plan, local codes and licensed practice decide."
)

STATEMENTS: dict[str, str] = {
    "H220": "Extremely flammable gas",
    "H272": "May intensify fire; oxidiser",
    "H290": "May be corrosive to metals",
    "H300": "Fatal if swallowed",
    "H301": "Toxic if swallowed",
    "H310": "Fatal in contact with skin",
    "H312": "Harmful in contact with skin",
    "H314": "Causes severe skin burns and eye damage",
    "H317": "May cause an allergic skin reaction",
    "H318": "Causes serious eye damage",
    "H330": "Fatal if inhaled",
    "H334": "May cause allergy or asthma symptoms or breathing difficulties if inhaled",
    "H340": "May cause genetic defects",
    "H350": "May cause cancer",
    "H360FD": "May damage fertility; may damage the unborn child",
    "H372": "Causes damage to organs through prolonged or repeated exposure",
    "H373": "May cause damage to organs through prolonged or repeated exposure",
    "H400": "Very toxic to aquatic life",
    "H410": "Very toxic to aquatic life with long lasting effects",
}


@dataclass(frozen=True)
class Agent:
    """One substance that can hurt.

    Parameters
    ----------
    id : str
        Stable name.
    name : str
        What it is called at the bench.
    place : {"bench", "field"}
        Where it is met.
    statements : tuple of str
        Keys of :data:`STATEMENTS`.
    cautions : tuple of str
        The usual precautions in plain words.
    exposure : str
        Workplace limits as printed in the source, or empty.
    source : str
        Where the statements and limits were read.
    """

    id: str
    name: str
    place: str
    statements: tuple[str, ...]
    cautions: tuple[str, ...]
    exposure: str
    source: str


AGENTS: tuple[Agent, ...] = (
    Agent(
        "dichromate",
        "Potassium dichromate, chromium(VI)",
        "bench",
        (
            "H272",
            "H301",
            "H312",
            "H314",
            "H317",
            "H330",
            "H334",
            "H340",
            "H350",
            "H360FD",
            "H372",
            "H410",
        ),
        (
            "Weigh the solid only in a hood; keep it from anything that burns.",
            "Gloves, face shield and apron; no dust in the air, none on a bench.",
            "Any exposure needs medical follow-up, even one that looks small.",
        ),
        "OSHA: 5 micrograms of chromium(VI) per cubic metre over 8 h, action level 2.5",
        "Regulation (EC) 1272/2008, Annex VI, index 024-002-00-6; 29 CFR 1910.1026",
    ),
    Agent(
        "sulfuric_acid",
        "Sulfuric acid, concentrated, also with silver sulfate",
        "bench",
        ("H290", "H314"),
        (
            "Acid into water, never water into concentrated acid: it boils and spits.",
            "Add slowly, in the hood, behind a shield; the tube gets hot.",
            "Splash goggles and face shield, long acid gloves, apron, closed shoes.",
        ),
        "OSHA: 1 mg per cubic metre over 8 h",
        "Regulation (EC) 1272/2008, Annex VI (H314); safety data sheets (H290); 29 CFR 1910.1000, table Z-1",
    ),
    Agent(
        "mercury_sulfate",
        "Mercury(II) sulfate",
        "bench",
        ("H300", "H310", "H330", "H373", "H410"),
        (
            "Poison by mouth, skin and lung: gloves without holes, hood on, hands washed after each batch.",
            "Every tube of a mercury recipe holds mercury, also when it is broken or spilled.",
            "None of it goes down a drain.",
        ),
        "ACGIH: 0.025 mg per cubic metre, inorganic mercury, skin",
        "Regulation (EC) 1272/2008, Annex VI, group entry for inorganic mercury compounds",
    ),
    Agent(
        "silver_sulfate",
        "Silver sulfate",
        "bench",
        ("H318", "H410"),
        ("Keep it from eyes and skin; it stains. It leaves the laboratory only as waste.",),
        "OSHA: 0.01 mg per cubic metre, as silver",
        "Safety data sheets; statements from memory",
    ),
    Agent(
        "digest",
        "The mixed digest, before and after heating",
        "bench",
        ("H290", "H314", "H340", "H350", "H410"),
        (
            "Hot chromic acid with mercury in a closed tube: look for stars and cracks before heating.",
            "Never tighten or open a hot cap. If a tube bursts, stay away from the hood until it has vented.",
            "Do not neutralise, dilute or pour away: the whole tube is hazardous waste.",
        ),
        "",
        "A published safety data sheet of a mixed COD digestion reagent",
    ),
    Agent(
        "hydrogen_sulfide",
        "Hydrogen sulfide in a sewer",
        "field",
        ("H220", "H330", "H400"),
        (
            "Smell proves nothing: the nose fails at about 100 ppm.",
            "Test before the lid is off and while you work: oxygen, then combustible gas, then toxic gas.",
            "Leave at the first alarm, upwind, and call.",
        ),
        "OSHA: ceiling 20 ppm; immediately dangerous at 100 ppm",
        "Regulation (EC) 1272/2008, Annex VI; 29 CFR 1910.1000, table Z-2; 29 CFR 1910.146, appendix E",
    ),
)


@dataclass(frozen=True)
class FieldHazard:
    """A danger of a discharge point, with the usual precaution.

    Parameters
    ----------
    id : str
        Stable name, as a discharge point lists it.
    name : str
        Short words for a card.
    caution : str
        What is usually done.
    """

    id: str
    name: str
    caution: str


FIELD_HAZARDS: tuple[FieldHazard, ...] = (
    FieldHazard(
        "traffic",
        "Traffic",
        "Vest, cones and a place to stand off the lane; a spotter where the plan asks for one.",
    ),
    FieldHazard(
        "gases",
        "Gas in the manhole",
        "Bump-test the meter, test from outside, keep it running. Never put your head in; never enter "
        "for a sample.",
    ),
    FieldHazard(
        "confined_space",
        "Confined space",
        "This tool cannot permit entry. Entry needs the local programme: permit, attendant and retrieval.",
    ),
    FieldHazard(
        "slips", "Slips and falls", "Dry footing, one hand free on a ladder, the open manhole guarded."
    ),
    FieldHazard(
        "sharps",
        "Needles and glass in the water",
        "Tongs and puncture-resistant gloves; no hand under the surface.",
    ),
    FieldHazard(
        "heat", "Hot discharge or heat", "Long gloves and a dipper for hot water; shade, water and breaks."
    ),
    FieldHazard("cold", "Cold and ice", "Grip under the shoes, warm hands before glass, a time limit."),
    FieldHazard("dogs", "Dogs or aggression", "Do not argue, leave, call; record it as its own outcome."),
    FieldHazard(
        "chemicals",
        "Corrosive or reacting discharge",
        "Face shield and long gloves; acid for preservation boxed, upright and belted in the vehicle.",
    ),
    FieldHazard("alone", "Working alone", "Call in at the agreed time; say where you are before you start."),
)


@dataclass(frozen=True)
class EmergencyLine:
    """What to do at once, in general words, shown without signing in.

    Parameters
    ----------
    id : str
        Stable name.
    title : str
        What has happened.
    lines : tuple of str
        What is generally done, in order.
    """

    id: str
    title: str
    lines: tuple[str, ...]


EMERGENCY: tuple[EmergencyLine, ...] = (
    EmergencyLine(
        "call",
        "Call",
        (
            "Call the local emergency number: {emergency_number}.",
            "Poison advice: {poison_number}. Have the safety data sheet of the lot in your hand.",
        ),
    ),
    EmergencyLine(
        "eyes_skin",
        "In the eyes or on the skin",
        (
            "Water at once, plenty of it, for 15 to 20 minutes or longer; take off wet clothing.",
            "Emergency medical help at once. Take the safety data sheet along.",
        ),
    ),
    EmergencyLine(
        "breathed", "Breathed in", ("Fresh air, if that is safe for you. Emergency medical help.",)
    ),
    EmergencyLine(
        "swallowed",
        "Swallowed",
        ("Rinse the mouth. Do not make the person vomit. Emergency medical help at once.",),
    ),
    EmergencyLine(
        "follow_up",
        "Afterwards",
        ("Chromium and mercury need medical follow-up even when it looks small. Write down what happened.",),
    ),
    EmergencyLine(
        "spill",
        "Spill or broken tube",
        (
            "Warn others, leave the bench, hood on. More than a small tray: trained responders.",
            "Absorb with inert material, not sawdust or paper. Broken tubes are sharps.",
            "Collect everything as hazardous waste; mercury needs its own decontamination.",
        ),
    ),
    EmergencyLine(
        "gas",
        "Gas alarm or a person down in a manhole",
        (
            "Do not go in. Most who die in manholes went in to help.",
            "Get away upwind, call, keep others out, use retrieval from outside only.",
        ),
    ),
)
