"""Invent the rows of the wound-infection cohort: seeded, so that the same file comes back.

python make_data.py            # writes wound-infection.csv beside this script
"""

from __future__ import annotations

import csv
from pathlib import Path

import numpy as np

SEED = 20230121
ROWS = 1460


def main() -> None:
    draw = np.random.default_rng(SEED)
    age = np.clip(draw.normal(62, 16, ROWS), 15, 96).round().astype(int)
    bmi = np.clip(draw.gamma(22, 1.24, ROWS), 16.5, 52).round(1)
    smoker = draw.random(ROWS) < 0.34 - 0.002 * (age - 63)
    diabetes = draw.random(ROWS) < 0.08 + 0.006 * np.clip(bmi - 24, 0, None)
    asa = np.clip(np.round(1.4 + 0.016 * (age - 40) + 0.5 * diabetes + draw.normal(0, 0.75, ROWS)), 1, 4)
    ward = draw.choice(["North", "South", "East"], ROWS, p=[0.46, 0.33, 0.21])
    urgency = draw.choice(["elective", "emergency"], ROWS, p=[0.93, 0.07])
    minutes = np.clip(draw.gamma(9, 15, ROWS), 35, 420).round().astype(int)
    log_odds = (
        -2.62
        + 0.72 * smoker
        + 0.012 * (age - 63)
        + 0.0075 * (bmi - 25) ** 2 * (bmi > 20)
        - 0.0003 * np.clip(bmi - 38, 0, None) ** 3
        + 0.38 * (asa - 2)
        + 0.0035 * (minutes - 135)
        + np.select([ward == "South", ward == "East"], [0.18, -0.12], 0.0)
    )
    infection = draw.random(ROWS) < 1 / (1 + np.exp(-log_odds))
    # Body-mass index is weighed less often in the East ward; smoking is sometimes not asked.
    bmi_known = draw.random(ROWS) > np.where(ward == "East", 0.13, 0.04)
    smoker_known = draw.random(ROWS) > 0.025
    with Path(__file__).with_name("wound-infection.csv").open("w", newline="", encoding="utf-8") as file:
        write = csv.writer(file)
        write.writerow(
            ["patient", "urgency", "age", "bmi", "smoker", "diabetes", "asa", "ward", "minutes", "infection"]
        )
        for i in range(ROWS):
            write.writerow(
                [
                    f"Q{i + 1:05d}",
                    urgency[i],
                    age[i],
                    bmi[i] if bmi_known[i] else "",
                    ("yes" if smoker[i] else "no") if smoker_known[i] else "NA",
                    "yes" if diabetes[i] else "no",
                    int(asa[i]),
                    ward[i],
                    minutes[i],
                    "yes" if infection[i] else "no",
                ]
            )


if __name__ == "__main__":
    main()
