"""Descriptions of an invented study: one that uses every key, and a small one."""

FULL = """\
# An invented cohort.
study:
  title: Wound infection after elective bowel surgery, Quillmere
  design: cohort
  purpose: association
  setting: Three hospitals
  period: {from: 2021-01-01, to: 2023-12-31}
  authors: [Quillmere Public Health Unit]
  stated:
    "22": No external funding
data:
  file: wound-infection.csv
  identifier: patient
  missing: ["", NA, 999]
  delimiter: ";"
  decimal: ","
  encoding: utf-8
variables:
  infection: {label: Wound infection within 30 days, kind: binary, present: yes}
  smoker:    {label: Current smoker, kind: binary, levels: [no, yes], present: yes, expected: raises}
  age:       {label: Age, kind: quantity, unit: years, per: 10, plausible: [18, 105], column: AGE}
  bmi:
    label: Body-mass index
    kind: quantity
    unit: kg/m2
    missing: [99.9]
    shape: {spline: {knots: 4}}
    reference: 25
    compare: [[25, 30], [25, 35]]
    dated_by: weighed_on
  weighed_on: {kind: date}
  albumin: {kind: quantity, shape: quadratic}
  creatinine: {kind: quantity, shape: log2}
  asa:       {label: ASA class, kind: ordered, levels: [1, 2, 3, 4], reference: 1}
  ward:      {label: Ward, kind: category, levels: [North, South, East], reference: North}
  age_band:  {from: age, cut: [50, 65, 80], cut_chosen: beforehand, label: Age band}
  urgency:   {kind: category}
  days:      {kind: quantity, unit: days}
outcome: infection
exposures: [smoker]
covariates:
  - {variable: age, reason: Older people smoke less, planned: true}
  - bmi
  - asa
  - ward
exclusions:
  - {reason: Emergency operation, where: {variable: urgency, is: emergency}}
  - {reason: Under 18, where: {variable: age, below: 18}}
  - reason: Weighed late
    where:
      any:
        - {variable: weighed_on, above: 2023-12-31}
        - all:
            - {variable: weighed_on, missing: true}
            - {variable: ward, in: [South, East]}
            - {variable: theatre, is_not: 007}
follow_up: {statement: [equal], variable: days, exposure_measured: at start}
selection: {method: beforehand, candidates: 12}
sampling: {clusters: hospital, weights: none used, matched_on: [sex]}
analysis: {confidence: 95, intervals: profile likelihood, seed: 20260101}
assessment: {groups: 10}
disclosure: {smallest_count: 5, hide_zero: no, show_people: false}
report: {formats: [html, pdf], language: en}
"""

SMALL = """\
study: {title: Wound infection in Quillmere, design: cohort, purpose: association}
data: {file: wound-infection.csv}
variables:
  infection: {kind: binary, present: yes}
  smoker: {kind: binary, present: yes}
  age: {kind: quantity}
  ward: {kind: category, levels: [North, South]}
  seen: {kind: date}
outcome: infection
exposures: [smoker]
covariates: [age, ward]
"""
