"""The sums of chemical oxygen demand by closed reflux and dichromate.

From a recipe to what it can oxidise, from standards to a curve, from tubes to
a result with its uncertainty, and the checks that let a stranger believe it.
Concentrations are mg O2/L, absorbance is in AU, volumes in mL, masses as
named. Everything here is pure: numbers and dataclasses in, frozen dataclasses
out; no clock, no file, no network. What cannot be used raises
:class:`app.errors.InputError`, naming every wrong field at once.
"""
