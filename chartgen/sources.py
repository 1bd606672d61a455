"""The one bibliography, by key. Method pages, the catalogue, docstrings and tests quote a work by its key from here.

`opened` says how the work was seen: True where a page of it, or of a text that reprints it, was read while the value
was entered; False where the value is quoted from memory, which is then said wherever it is printed.
"""

from __future__ import annotations

from dataclasses import dataclass

MEASURED, STATUTE, DESIGN, RULE, CHOSEN = "measured", "statute", "design value", "rule of thumb", "chosen by us"


@dataclass(frozen=True, slots=True)
class Work:
    """One work: `text` as printed in a list of sources, `kind` of evidence it gives, whether it was `opened`."""

    text: str
    kind: str
    opened: bool


# ruff: noqa: E501 - one work is one line
# fmt: off
BIBLIOGRAPHY: dict[str, Work] = {
    "cgpm-1901": Work("3rd General Conference on Weights and Measures, 1901, declaration on gravity: 9.80665 m/s² exactly", STATUTE, False),
    "yard-1959": Work("International yard and pound agreement, 1959: 1 ft = 0.3048 m, 1 mile = 1609.344 m exactly", STATUTE, False),
    "highway-code-126": Work("The Highway Code (United Kingdom), rule 126, typical stopping distances and the two-second gap", STATUTE, True),
    "green-book-level": Work("AASHTO, A Policy on Geometric Design of Highways and Streets, table 3-1 (6th ed. 2011, 7th ed. 2018), stopping sight distance on level roadways", DESIGN, False),
    "green-book-grades": Work("AASHTO, A Policy on Geometric Design of Highways and Streets, table 3-2 (2011, 2018), stopping sight distance on grades", DESIGN, False),
    "green-book-1994": Work("AASHTO, A Policy on Geometric Design of Highways and Streets, table III-1 (1990, 1994; superseded 2001)", DESIGN, False),
    "green-book-decision": Work("AASHTO, A Policy on Geometric Design of Highways and Streets, table 3-3 (2011, 2018), decision sight distance", DESIGN, False),
    "highway-handbook-2.2": Work("R. L. Brockenbrough and K. J. Boedecker, Highway Engineering Handbook, McGraw-Hill, table 2.2", DESIGN, True),
    "cdl-manual": Work("AAMVA, model Commercial Driver License Manual (2005 revision and later), sections 2.6.1, 2.7 and 5.4.2", STATUTE, True),
    "cd-109": Work("Design Manual for Roads and Bridges (United Kingdom), CD 109 table 2.10, carried over from TD 9/93 table 3", DESIGN, True),
    "queensland": Work("Queensland Government, Transport and Main Roads, stopping distances on dry roads", RULE, True),
    "france-412-12": Work("Code de la route (France), article R412-12: at least two seconds' distance", STATUTE, True),
    "france-1955": Work("Arrêté du 18 août 1955 (France), articles 31 to 33, braking of vehicles", STATUTE, True),
    "japan-textbook": Work("Japan, standard table of the driving-licence textbooks (dry road, good tyres)", RULE, True),
    "aland": Work("Government of Åland (Finland), stopping distances on dry asphalt", RULE, True),
    "samoa-22-1109": Work("American Samoa Code Annotated, § 22.1109", STATUTE, True),
    "icbc-commercial": Work("ICBC (British Columbia), Driving Commercial Vehicles, chapter 2", RULE, True),
    "ral-2012": Work("FGSV (Germany), RAL 2012 and RAA 2008, required stopping sight distance", DESIGN, False),
    "norma-3.1-ic": Work("Norma 3.1-IC Trazado (Spain), Orden FOM/273/2016, stopping distance", DESIGN, False),
    "irc-66": Work("Indian Roads Congress, IRC:66-1976, table 1, safe stopping sight distance", DESIGN, False),
    "fmvss-121": Work("49 CFR 571.121 (FMVSS 121), table II, stopping distances of air-braked vehicles (test figures)", STATUTE, False),
    "fmvss-135": Work("49 CFR 571.135 (FMVSS 135), stopping distances of light vehicles (test figures)", STATUTE, False),
    "un-r13": Work("UN Regulation No. 13, annex 4, braking of heavy vehicles (test figures)", STATUTE, False),
    "un-r13-h": Work("UN Regulation No. 13-H, annex 3, braking of passenger cars (test figures)", STATUTE, False),
    "un-r78": Work("UN Regulation No. 78, annex 3, braking of motorcycles (test figures)", STATUTE, False),
    "msha-m2": Work("30 CFR 57.14101, table M-2, seconds to travel 100 feet", STATUTE, True),
    "johansson-rumar-1971": Work("G. Johansson and K. Rumar, Drivers' brake reaction times, Human Factors 13(1), 1971", MEASURED, True),
    "olson-sivak-1986": Work("P. L. Olson and M. Sivak, Perception-response time to unexpected roadway hazards, Human Factors 28(1), 1986", MEASURED, True),
    "koppa-1997": Work("R. J. Koppa, Human Factors, chapter 3 of Traffic Flow Theory, revised monograph, 1997, table of lognormal brake-reaction times", MEASURED, False),
    "lerner-1995": Work("N. D. Lerner, Brake perception-reaction times of older and younger drivers, 1993 and 1995", MEASURED, True),
    "trl-2017": Work("TRL for a United Kingdom road-safety charity, 2017: 1.5 s as the mean over literature on thinking time", MEASURED, False),
    "baker-drag": Work("J. S. Baker, Traffic-Accident Investigation Manual, and L. B. Fricke, Traffic Accident Reconstruction, Northwestern University, pavement drag factors", MEASURED, True),
    "noon-1994": Work("R. K. Noon, Engineering Analysis of Vehicular Accidents, CRC Press 1994, average friction values", MEASURED, True),
    "bosch-handbook": Work("Bosch Automotive Handbook, static friction of new and worn tyres by speed and water", MEASURED, False),
    "wong-1.3": Work("J. Y. Wong, Theory of Ground Vehicles, table 1.3, average peak and sliding coefficients", MEASURED, False),
    "astm-e1960": Work("ASTM E1960 and PIARC, International Friction Index: F(S) = F60 exp((60 - S)/Sp)", STATUTE, False),
    "cars-1930": Work("M. Ezekiel, Methods of Correlation Analysis, Wiley 1930; open data set 'cars' of speeds and stopping distances", MEASURED, True),
    "astm-e1960-sp": Work("ASTM E1960, speed constant from texture: Sp = 14.2 + 89.7 MPD", STATUTE, False),
    "green-2000": Work("M. Green, How long does it take to stop?, Transportation Human Factors 2(3), 2000", MEASURED, True),
    "fambro-1998": Work("D. B. Fambro and others, Driver perception-brake response in stopping sight distance situations, Transportation Research Record 1628, 1998", MEASURED, True),
    "lr-131": Work("Road Research Laboratory (United Kingdom), report LR 131, 1968, suggested minimum braking force coefficients", MEASURED, True),
    "norma-3.1-ic-1999": Work("Norma 3.1-IC Trazado (Spain), Orden of 27 December 1999, stopping distance", DESIGN, False),
    "pa-175": Work("67 Pennsylvania Code chapter 175, table I, brake performance from 20 mile/h (values as in 49 CFR 393.52(d); test figures)", STATUTE, True),
    "va-46.2-1067": Work("Code of Virginia § 46.2-1067, stopping distances from 20 mile/h (test figures)", STATUTE, True),
    "cpsc-1512": Work("16 CFR 1512, requirements for bicycles (test figures)", STATUTE, False),
    "directive-96-53": Work("Council Directive 96/53/EC, annex I, 1.1, greatest lengths of vehicles", STATUTE, True),
    "bkatv": Work("Bußgeldkatalog-Verordnung (Germany), no. 12 of the schedule and table 2: distances in tenths of half the speedometer's figure in metres", STATUTE, True),
    "poland-19-3a": Work("Prawo o ruchu drogowym (Poland), article 19(3a), distance on motorways and expressways", STATUTE, False),
    "vic-three-seconds": Work("State of Victoria (Australia), pages for learner drivers, following distance", RULE, True),
    "va-46.2-1032": Work("Code of Virginia § 46.2-1032, multiple-beam headlights", STATUTE, True),
    "nj-39-3-57": Work("New Jersey Statutes 39:3-57, single-beam headlamps", STATUTE, True),
    "france-r313-2": Work("Code de la route (France), article R313-2, main beam", STATUTE, False),
    "france-r313-3": Work("Code de la route (France), article R313-3, dipped beam", STATUTE, True),
    "cdl-manual-2.11": Work("AAMVA, model Commercial Driver License Manual (2005 revision and later), section 2.11, driving at night", STATUTE, False),
}
# fmt: on


def cite(key: str) -> str:
    """The work's text, with the remark that it is quoted from memory where nobody opened it. KeyError if unknown."""
    work = BIBLIOGRAPHY[key]
    return work.text if work.opened else f"{work.text} (from memory)"
