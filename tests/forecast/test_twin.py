"""The tablet forecasts exactly as the server does."""

from __future__ import annotations

import json
import shutil
import subprocess
from pathlib import Path

import pytest

from tests.forecast.twin import VECTORS, cases

ROOT = Path(__file__).resolve().parents[2]

SCRIPT = """
import { readFileSync } from "node:fs";
import { expected, plan } from "./static/parts/forecast.js";
const near = (a, b) => Math.abs(a - b) <= 1e-6 * Math.max(1e-3, Math.abs(b));
const range = { name: "high", low: 20, high: 900, chloride_limit: 1998, reporting: 20 };
const given = { ranges: [range], dilutions: [1, 2, 5, 10, 20, 50, 100], chloride: 3000, decision_limit: 1500 };
const misses = [];
JSON.parse(readFileSync("tests/forecast/vectors.json")).forEach((v, i) => {
  const p = expected(v.pack, { days: 21000, field: v.field, activity: null });
  for (const [q, x] of Object.entries(v.quantiles)) if (!near(p.quantile(Number(q)), x)) misses.push([i, "quantile", q, p.quantile(Number(q)), x]);
  for (const [c, x] of Object.entries(v.cdf)) if (!near(p.cdf(Number(c)), x)) misses.push([i, "cdf", c, p.cdf(Number(c)), x]);
  for (const [l, x] of Object.entries(v.density)) if (!near(p.density(Number(l)), x)) misses.push([i, "density", l]);
  const made = plan(p, given);
  made.plans.forEach((one, k) => {
    if (!near(one.p_in_range, v.p_in_range[k]) || !near(one.p_over, v.p_over[k])) misses.push([i, "plan", k, one.p_in_range, v.p_in_range[k]]);
    if (JSON.stringify(one.objections) !== JSON.stringify(v.objections[k])) misses.push([i, "objections", k]);
  });
  if ((made.choice?.dilution_factor ?? null) !== v.choice) misses.push([i, "choice"]);
});
console.log(JSON.stringify(misses));
"""


def test_the_vectors_are_what_the_server_makes_now() -> None:
    assert json.loads(VECTORS.read_text(encoding="utf-8")) == json.loads(json.dumps(cases()))


def test_the_twin_agrees_to_one_in_a_million() -> None:
    node = shutil.which("node")
    if node is None:
        pytest.skip("node is absent: the tablet's forecast is not compared with the server's")
    run = subprocess.run(
        [node, "--input-type=module", "-e", SCRIPT], cwd=ROOT, capture_output=True, text=True, check=True
    )
    assert json.loads(run.stdout) == []
