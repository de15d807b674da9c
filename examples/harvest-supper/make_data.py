"""Invent the rows of the harvest-supper outbreak: seeded, so that the same file comes back.

python make_data.py            # writes harvest-supper.csv beside this script
"""

from __future__ import annotations

import csv
from pathlib import Path

import numpy as np

SEED = 19870914
CASES, CONTROLS = 64, 112


def main() -> None:
    draw = np.random.default_rng(SEED)
    rows = []
    for ill, size in ((True, CASES), (False, CONTROLS)):
        for _ in range(size):
            age_group = draw.choice(["child", "adult", "senior"], p=[0.2, 0.55, 0.25])
            custard = draw.random() < (0.80 if ill else 0.40)
            rows.append(
                {
                    "status": "case" if ill else "control",
                    "age_group": age_group,
                    "sex": draw.choice(["female", "male"]),
                    "custard": "yes" if custard else "no",
                    "cheese": "yes" if draw.random() < (0.5 if ill else 0.47) else "no",
                    # Nobody who stayed well had tasted the raw-milk posset.
                    "posset": "yes" if ill and draw.random() < 0.10 else "no",
                    "cider_cups": int(draw.poisson(1.6)) if age_group != "child" else 0,
                }
            )
    order = draw.permutation(len(rows))
    with Path(__file__).with_name("harvest-supper.csv").open("w", newline="", encoding="utf-8") as file:
        write = csv.DictWriter(file, ["person", *rows[0]], delimiter=";")
        write.writeheader()
        for number, place in enumerate(order, start=1):
            write.writerow({"person": number, **rows[place]})


if __name__ == "__main__":
    main()
