"""Make the sample study "Garden centres": two waves of a trade survey and its sampling plan.

Everything is invented: the land with its four regions, the trade, the brands and the answers. The
generator first makes a universe of 1,184 independent garden centres, then draws respondents in each
region separately and without replacement, about a third of all with unequal fractions.

Files written
-------------
garden_centres_spring.csv
    395 garden centres, spring wave. UTF-8 with a byte-order mark, semicolons, decimal commas, two
    header rows (codes, question texts), one blank line where two deliveries were joined, and an
    empty last column.
garden_centres_autumn.csv
    380 garden centres, autumn wave, Windows-1252. Six in ten answered in spring too and keep
    their number. Q6 is called STAFF now, Q15 is new, and Q9 has an answer nobody gave in spring.
garden_centres_plan.json
    The sampling plan of both waves.

Codes: Q1, Q2 and Q5 know refusals and don't knows (98, 99, 99999), Q10 and Q13 no answer (9), Q13
was not asked (-1) of those without training days. Cells after a broken-off interview are empty.

Run ``python sample_data/make_garden_centres.py``: it writes the same bytes each time. Only uniform
random numbers are used, because their stream does not change between versions of numpy. The seed
was chosen so that the spring wave shows what a manager meets: a size class with too few answers to
publish, a rare answer (3 of 40 in Westholm), and refusals that would quadruple an average.
"""

from __future__ import annotations

import csv
import json
from datetime import date, timedelta
from pathlib import Path
from statistics import NormalDist

import numpy as np

SEED = 17
REGIONS = {"Northmark": 402, "Lowmere": 331, "Eastreach": 268, "Westholm": 183}
SPRING = {"Northmark": 118, "Lowmere": 150, "Eastreach": 87, "Westholm": 40}
AUTUMN = {"Northmark": 112, "Lowmere": 142, "Eastreach": 84, "Westholm": 42}
STAYING = 0.6

SIZES = ("small", "medium", "large", "very large")
SIZE_SHARES = (0.48, 0.30, 0.16, 0.06)
STAFF = (4, 9, 22, 55)
SPEND = (600.0, 1400.0, 3300.0, 8600.0)
MOOD = {"Northmark": 0.0, "Lowmere": 0.5, "Eastreach": -0.7, "Westholm": 0.2}
PEAT_FREE = {"Northmark": 0.48, "Lowmere": 0.58, "Eastreach": 0.33, "Westholm": 0.45}
PLANS = ("Much more", "A little more", "About the same", "Less", "Don't know")
SUPPLY = ("Wholesaler", "Direct from the maker", "Buying group")
BRANDS = {
    "Lindenroot": 0.44,
    "Marlow Peat": 0.29,
    "Greenhollow": 0.37,
    "Tillerby": 0.21,
    "Old Orchard": 0.16,
    "Fennimore": 0.12,
    "Brackenfold": 0.08,
    "Summerloam": 0.05,
}
GRID = ("Advice by telephone", "Seasonal price lists", "Training courses", "Speed of replies")
OPENINGS = (
    "More courses in winter, please.",
    "Price lists arrive too late; we order in January.",
    "The telephone line is good; the web page is not.",
    'The voice on the telephone said "next week"; that was in March.',
    "Our café corner pays better than compost.",
    "Bags of 40 l at 6,50 € are too dear; 20 l sells.",
    "We would buy peat-free if it kept as long…",
    "Customers ask for peat-free, but few of them buy it.",
    "Deliveries are late every spring.",
)
ENDINGS = (
    "",
    "",
    "",
    " Please call after six.",
    "\nThank you for asking.",
    " The fee is too high for what we get; smaller firms should pay less.",
    " Two things:\n1. earlier price lists\n2. delivery before Easter",
    " My daughter takes over next year.",
)
TEXTS = {
    "ID": "Register number",
    "REGION": "Region",
    "DATE": "Date of interview",
    "MINUTES": "Length of interview in minutes",
    "MODE": "How was the interview done?",
    "STATUS": "Status of the interview",
    "SIZE": "Size of the garden centre",
    "Q1": "How satisfied are you with the service of the association? (0 to 10)",
    **{f"Q2_{i}": f"How good is each of these? (0 to 10) - {x}" for i, x in enumerate(GRID, 1)},
    "Q3": "Will you buy more or less compost next season?",
    "Q4": "Do you stock peat-free compost?",
    "Q5": "How much did you spend on compost last year?",
    "Q6": "How many people work at your garden centre?",
    **{f"Q7_{i}": f"Which brands do you stock? - {brand}" for i, brand in enumerate(BRANDS, 1)},
    "Q8": "Did you close a branch in the last twelve months?",
    "Q9": "Where do you mainly buy compost?",
    "Q10": "The membership fee is fair (1 = not at all, 5 = fully)",
    "Q11": "For how many years have you been a member?",
    "Q12": "On how many days did you or your staff attend training last year?",
    "Q13": "How useful was the training? (1 = not at all, 5 = very)",
    "Q14": "Is there anything else you would like to tell us?",
}

Record = dict[str, str]


class Chance:
    """Random draws from uniform numbers alone."""

    def __init__(self, seed: int) -> None:
        self._numbers = np.random.Generator(np.random.PCG64(seed))

    def part(self) -> float:
        """Return a number between 0 and 1, both excluded."""
        return min(max(float(self._numbers.random()), 1e-12), 1 - 1e-12)

    def happens(self, probability: float) -> bool:
        """Return True with the given probability."""
        return self.part() < probability

    def normal(self, mean: float = 0.0, deviation: float = 1.0) -> float:
        """Return a normally distributed number."""
        return mean + deviation * NormalDist().inv_cdf(self.part())

    def one_of(self, options: tuple[str, ...], shares: tuple[float, ...]) -> str:
        """Return one of the options with chances in proportion to the shares."""
        mark = self.part() * sum(shares)
        reached = np.cumsum(shares)
        return options[min(int(np.searchsorted(reached, mark)), len(options) - 1)]

    def drawn(self, units: list[Record], count: int) -> list[Record]:
        """Return ``count`` units drawn without replacement."""
        order = np.argsort(self._numbers.random(len(units)), kind="stable")
        return [units[i] for i in order[:count]]


def make_universe(chance: Chance) -> list[Record]:
    """Return the 1,184 garden centres with what stays the same in both waves."""
    regions = [region for region, count in REGIONS.items() for _ in range(count)]
    mixed = [regions[i] for i in np.argsort([chance.part() for _ in regions], kind="stable")]
    return [_garden_centre(chance, number, region) for number, region in enumerate(mixed, 1)]


def _garden_centre(chance: Chance, number: int, region: str) -> Record:
    size = chance.one_of(SIZES, SIZE_SHARES)
    rank = SIZES.index(size)
    staff = max(1, round(STAFF[rank] * float(np.exp(chance.normal(0, 0.35)))))
    mood = chance.normal(6.9 + MOOD[region] - 0.25 * rank, 1.5)
    spend = SPEND[rank] * float(np.exp(chance.normal(0.08 * MOOD[region], 0.8)))
    return {
        "ID": f"{number:05d}",
        "REGION": region,
        "SIZE": size,
        "Q6": str(staff),
        "Q11": str(max(1, min(45, round(chance.normal(16 + 2 * rank, 9))))),
        "mood": repr(mood),
        "spend": repr(spend),
        "peat_free": str(int(chance.happens(PEAT_FREE[region] + 0.06 * rank))),
        "brands": "".join(
            str(int(chance.happens(min(0.9, share * (0.8 + 0.35 * rank)))))
            for share in BRANDS.values()
        ),
    }


def interview(chance: Chance, centre: Record, first_day: date, drift: float) -> Record:
    """Return the answers of one garden centre in one wave."""
    mood = float(centre["mood"]) + drift
    mode = chance.one_of(("telephone", "online"), (0.64, 0.36))
    day = first_day + timedelta(days=int(30 * chance.part() ** 1.4))
    minutes = (15.5 if mode == "telephone" else 10.0) * np.exp(chance.normal(0, 0.25))
    row = {name: centre[name] for name in ("ID", "REGION", "SIZE", "Q6", "Q11")}
    row |= {"DATE": day.strftime("%d.%m.%Y"), "MINUTES": _comma(float(minutes), 1)}
    row |= {"MODE": mode, "STATUS": "complete"}
    row |= _ratings(chance, mood) | _compost(chance, centre, mood) | _membership(chance, mood)
    row["Q14"] = _comment(chance) if chance.happens(0.15) else ""
    return _broken_off(row) if chance.happens(0.012) else row


def _ratings(chance: Chance, mood: float) -> Record:
    first = str(_on_scale(mood + chance.normal(0, 0.7), 0, 10))
    lost = chance.part()
    row = {"Q1": "99" if lost < 0.03 else "98" if lost < 0.042 else first}
    for i, lift in enumerate((0.6, -0.5, 0.2, -0.9), 1):
        rated = _on_scale(0.7 * mood + 2.0 + lift + chance.normal(0, 1.5), 0, 10)
        row[f"Q2_{i}"] = "99" if chance.happens(0.04 if i != 3 else 0.11) else str(rated)
    return row


def _compost(chance: Chance, centre: Record, mood: float) -> Record:
    lift = 0.06 * (mood - 7)
    row = {"Q3": chance.one_of(PLANS, (0.11 + lift / 3, 0.24 + lift, 0.41, 0.17 - lift / 2, 0.07))}
    row["Q4"] = "Yes" if centre["peat_free"] == "1" else "No"
    row["Q4"] = "Don't know" if chance.happens(0.035) else row["Q4"]
    spent = _comma(float(centre["spend"]) * float(np.exp(chance.normal(0, 0.2))), 2)
    row["Q5"] = "99999" if chance.happens(0.072) else spent
    for i, stocked in enumerate(centre["brands"], 1):
        row[f"Q7_{i}"] = stocked if chance.happens(0.95) else str(1 - int(stocked))
    row["Q8"] = "Yes" if chance.happens(0.06) else "No"
    row["Q9"] = chance.one_of(SUPPLY, (0.52, 0.27, 0.21))
    return row


def _membership(chance: Chance, mood: float) -> Record:
    days = max(0, round(chance.normal(0.4 + 0.25 * mood, 2.2)))
    useful = str(_on_scale(2.2 + 0.2 * mood + chance.normal(0, 0.8), 1, 5))
    fair = str(_on_scale(0.6 + 0.38 * mood + chance.normal(0, 0.9), 1, 5))
    return {
        "Q10": "9" if chance.happens(0.03) else fair,
        "Q12": str(days),
        "Q13": "-1" if days == 0 else "9" if chance.happens(0.03) else useful,
    }


def _comment(chance: Chance) -> str:
    opening = chance.one_of(OPENINGS, (1.0,) * len(OPENINGS))
    return opening + chance.one_of(ENDINGS, (1.0,) * len(ENDINGS))


def _broken_off(row: Record) -> Record:
    """Return the answers of an interview that ended after Q6."""
    asked = list(TEXTS)[: list(TEXTS).index("Q7_1")]
    return {name: answer if name in asked else "" for name, answer in row.items()}


def _on_scale(value: float, low: int, high: int) -> int:
    return min(high, max(low, round(value)))


def _comma(value: float, places: int) -> str:
    return f"{value:.{places}f}".replace(".", ",")


def draw_wave(chance: Chance, pools: list[tuple[list[Record], dict[str, int]]]) -> list[Record]:
    """Return units drawn by region without replacement from each pool with its counts."""
    return [
        unit
        for pool, counts in pools
        for region, count in counts.items()
        for unit in chance.drawn([u for u in pool if u["REGION"] == region], count)
    ]


def make_spring(chance: Chance, universe: list[Record]) -> list[Record]:
    """Return the rows of the spring wave in the order of the interviews."""
    units = draw_wave(chance, [(universe, SPRING)])
    return _by_date([interview(chance, unit, date(2026, 3, 2), 0.0) for unit in units])


def make_autumn(chance: Chance, universe: list[Record], spring: list[Record]) -> list[Record]:
    """Return the rows of the autumn wave: part of the spring panel, the rest freshly drawn."""
    known = {row["ID"] for row in spring}
    panel = [unit for unit in universe if unit["ID"] in known]
    others = [unit for unit in universe if unit["ID"] not in known]
    stay = {region: min(round(STAYING * n), SPRING[region]) for region, n in AUTUMN.items()}
    fresh = {region: n - stay[region] for region, n in AUTUMN.items()}
    units = draw_wave(chance, [(panel, stay), (others, fresh)])
    rows = [interview(chance, unit, date(2026, 9, 7), 0.25) for unit in units]
    return _by_date([_autumn_changes(chance, row) for row in rows])


def _autumn_changes(chance: Chance, row: Record) -> Record:
    row = {"STAFF" if name == "Q6" else name: answer for name, answer in row.items()}
    if row["Q9"] and chance.happens(0.06):
        row["Q9"] = "Online marketplace"
    row["Q15"] = chance.one_of(("Yes", "No", "Don't know"), (0.34, 0.58, 0.08))
    return row


def _by_date(rows: list[Record]) -> list[Record]:
    return sorted(rows, key=lambda row: (row["DATE"][3:5], row["DATE"][:2], row["ID"]))


def autumn_texts() -> dict[str, str]:
    """Return the columns of the autumn wave with their question texts."""
    renamed = {"STAFF" if name == "Q6" else name: text for name, text in TEXTS.items()}
    comment = renamed.pop("Q14")
    return renamed | {"Q15": "Do you plan to sell online next year?", "Q14": comment}


def write_wave(path: Path, texts: dict[str, str], rows: list[Record], encoding: str) -> Path:
    """Write one wave as fieldwork delivers it and return its path."""
    with path.open("w", encoding=encoding, newline="") as file:
        writer = csv.writer(file, delimiter=";", lineterminator="\r\n")
        writer.writerow([*texts, ""])
        writer.writerow([*texts.values(), ""])
        for position, row in enumerate(rows):
            if position == 210:
                file.write("\r\n")
            writer.writerow([*(row[name] for name in texts), ""])
    return path


def write_plan(path: Path) -> Path:
    """Write the sampling plan and return its path."""
    plan = {
        "universe": "all independent garden centres in the four regions",
        "unit_one": "garden centre",
        "unit_many": "garden centres",
        "universe_size": sum(REGIONS.values()),
        "as_of": "1 January 2026",
        "source": "register of the garden trade association",
        "method": "drawn by chance from a list",
        "replacement": False,
        "strata_column": "REGION",
        "strata": [{"label": k, "population_size": v} for k, v in REGIONS.items()],
        "weights_column": "",
        "clusters_column": "",
        "universe_clusters": None,
        "provisional": False,
    }
    path.write_bytes((json.dumps(plan, indent=2) + "\n").encode())
    return path


def write_files(folder: Path) -> tuple[Path, ...]:
    """Write all files of the study into a folder and return their paths."""
    chance = Chance(SEED)
    universe = make_universe(chance)
    spring = make_spring(chance, universe)
    autumn = make_autumn(chance, universe, spring)
    return (
        write_wave(folder / "garden_centres_spring.csv", TEXTS, spring, "utf-8-sig"),
        write_wave(folder / "garden_centres_autumn.csv", autumn_texts(), autumn, "cp1252"),
        write_plan(folder / "garden_centres_plan.json"),
    )


if __name__ == "__main__":
    for written in write_files(Path(__file__).parent):
        print(f"{written.name}: {written.stat().st_size:,} bytes")
