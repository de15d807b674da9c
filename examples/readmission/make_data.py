"""Invent the rows of the readmission study: seeded, so that the same file comes back.

python make_data.py            # writes readmission.csv beside this script
"""

from __future__ import annotations

import csv
from pathlib import Path

import numpy as np

SEED = 20250302
ROWS = 820


def main() -> None:
    draw = np.random.default_rng(SEED)
    age = np.clip(draw.normal(71, 11, ROWS), 40, 99).round().astype(int)
    nights = np.clip(draw.gamma(2.2, 2.6, ROWS).round(), 1, 40).astype(int)
    admissions = draw.poisson(0.9, ROWS)
    creatinine = np.exp(draw.normal(4.5, 0.38, ROWS)).round().astype(int)
    alone = draw.random(ROWS) < 0.37
    heart = draw.random(ROWS) < 0.31
    haemoglobin = (draw.normal(126, 17, ROWS)).round().astype(int)
    log_odds = (
        -2.75
        + 0.014 * (age - 71)
        + 0.055 * (nights - 5)
        + 0.33 * admissions
        + 0.45 * np.log2(creatinine / 90)
        + 0.28 * alone
        + 0.42 * heart
        - 0.008 * (haemoglobin - 126)
    )
    back = draw.random(ROWS) < 1 / (1 + np.exp(-log_odds))
    tested = draw.random(ROWS) > 0.03
    with Path(__file__).with_name("readmission.csv").open("w", newline="", encoding="utf-8") as file:
        write = csv.writer(file)
        write.writerow(
            [
                "stay",
                "age",
                "nights",
                "admissions",
                "creatinine",
                "haemoglobin",
                "alone",
                "heart",
                "readmitted",
            ]
        )
        for i in range(ROWS):
            write.writerow(
                [
                    f"L{i + 1:04d}",
                    age[i],
                    nights[i],
                    admissions[i],
                    creatinine[i] if tested[i] else "",
                    haemoglobin[i] if tested[i] else "",
                    "yes" if alone[i] else "no",
                    "yes" if heart[i] else "no",
                    "yes" if back[i] else "no",
                ]
            )


if __name__ == "__main__":
    main()
