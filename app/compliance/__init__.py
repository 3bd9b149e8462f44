"""What the sums of a pretreatment programme say, and on whose authority.

Limits and decisions, preservation and holding, flow at the point, standing
over six months, loads, charges, the ratio of BOD to COD, trends and
comparisons. Federal text is the floor, the local ordinance and the permit
decide, and a state may be stricter than both: every number of a rule is a
setting with its source as default and travels with each answer.

Everything here is pure: dataclasses and numbers in, frozen dataclasses out; no
clock, no file, no network. What cannot be used raises
:class:`app.errors.InputError`.
"""
