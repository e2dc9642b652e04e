"""The decision in the browser and in the package are one: both answer the committed vectors."""

from __future__ import annotations

import json
import random
import shutil
import subprocess
from pathlib import Path
from typing import Any

import pytest

from commission.acceptance.decision import Rule, decide, fixed, significant
from commission.acceptance.vectors import answer_of, files, vectors

ROOT = Path(__file__).resolve().parents[2]
SCRIPT = ROOT / "site_templates" / "scripts" / "decision.js"
VECTORS = ROOT / "tests" / "acceptance" / "decision_vectors.json"
NODE = shutil.which("node")
node = pytest.mark.skipif(NODE is None, reason="node is not installed: the script is not run by this test")

RUN = """
const fs = require("fs"), vm = require("vm");
const [script, page] = process.argv.slice(1, 3).map((p) => fs.readFileSync(p, "utf8"));
vm.runInThisContext(script);
vm.runInThisContext(page);
const given = JSON.parse(fs.readFileSync(0, "utf8"));
const errors = given.wrong.map((a) => {
  try { commissionDecision.decide(...a); return null; } catch (e) { return e.message; }
});
console.log(JSON.stringify({
  failed: commissionDecision.selfTest(given.vectors), page: commissionDecision.selfTest(commissionDecisionVectors),
  errors,
}));
"""


def in_node(given: dict[str, Any]) -> dict[str, Any]:
    """Run the script in node on given vectors."""
    assert NODE is not None
    page = SCRIPT.with_name("decision_vectors.js")
    done = subprocess.run(
        [NODE, "-e", RUN, str(SCRIPT), str(page)], input=json.dumps(given), capture_output=True, encoding="utf-8",
        timeout=60, check=True,
    )  # fmt: skip
    found: dict[str, Any] = json.loads(done.stdout)
    return found


def test_committed_files_are_the_generated_ones() -> None:
    """The vectors in the repository are those that the generator makes."""
    for path, text in files().items():
        assert (ROOT / path).read_text(encoding="utf-8") == text, f"run python -m commission.acceptance.vectors: {path}"


def test_python_answers_the_committed_vectors() -> None:
    """The package gives each committed answer."""
    data = json.loads(VECTORS.read_text(encoding="utf-8"))
    for vector in data["decide"]:
        found, answer = decide(*vector["arguments"]), vector["answer"]
        assert found.outcome == answer["outcome"], vector["name"]
        assert found.probability_of_conformity == pytest.approx(answer["probability"], abs=1e-9), vector["name"]
        assert found.acceptance_low == pytest.approx(answer["acceptanceLow"]), vector["name"]
        assert found.uncertainty_needed == pytest.approx(answer["uncertaintyNeeded"]), vector["name"]
    for vector in data["significant"]:
        assert significant(*vector["arguments"]) is vector["answer"], vector["name"]
    for vector in data["fixed"]:
        assert fixed(*vector["arguments"]) == vector["answer"], vector["name"]


def test_every_outcome_of_each_rule_is_among_the_vectors() -> None:
    """The vectors would notice a change of either rule: each of its outcomes is there."""
    seen = {(v["arguments"][4], v["answer"]["outcome"]) for v in vectors()["decide"]}
    assert seen == {(r, o) for r in ("simple", "guarded") for o in ("conforming", "not conforming", "undecided")}


@node
def test_script_answers_the_committed_vectors() -> None:
    """The script gives each committed answer, and passes the check that a page makes at start."""
    found = in_node({"vectors": json.loads(VECTORS.read_text(encoding="utf-8")), "wrong": []})
    assert found == {"failed": [], "page": [], "errors": []}


@node
def test_script_and_package_agree_on_random_cases() -> None:
    """On 2000 seeded cases, many of them near a limit, script and package give the same answer."""
    random.seed(106)
    cases = []
    for n in range(2000):
        value, u = random.uniform(-50.0, 50.0), random.choice([0.0, random.uniform(0.01, 5.0)])
        near = (
            value + random.choice([0.0, 1.0, -1.0, 1.6449, -1.6449]) * u + random.choice([0.0, random.gauss(0.0, 2.0)])
        )
        width = random.uniform(0.1, 20.0)
        lower, upper = random.choice([(near, None), (None, near), (near, near + width), (near - width, near)])
        largest = random.choice([None, random.uniform(0.1, 10.0)])
        rule: Rule = random.choice(["simple", "guarded"])
        arguments = (value, u, lower, upper, rule, random.choice([0.9, 0.95, 0.99]), largest)
        cases.append({"name": str(n), "arguments": list(arguments), "answer": answer_of(arguments)})
    assert {c["answer"]["outcome"] for c in cases} == {"conforming", "not conforming", "undecided"}
    found = in_node({"vectors": {"decide": cases, "significant": [], "fixed": []}, "wrong": []})
    assert found["failed"] == []


@node
def test_self_test_of_the_script_can_fail() -> None:
    """Each kind of vector with a wrong answer is named by the self-test."""
    wrong = json.loads(VECTORS.read_text(encoding="utf-8"))
    wrong["decide"][0]["answer"]["outcome"] = "undecided"
    wrong["decide"][3]["answer"]["probability"] += 1e-6
    wrong["significant"][0]["answer"] = True
    wrong["fixed"][0]["answer"] = "0"
    names = [wrong["decide"][0]["name"], wrong["decide"][3]["name"], wrong["significant"][0]["name"],
             wrong["fixed"][0]["name"]]  # fmt: skip
    assert in_node({"vectors": wrong, "wrong": []})["failed"] == names


@node
def test_script_refuses_nonsense() -> None:
    """The script throws where the package raises."""
    wrong = [
        [1, 1, None, None, "simple", 0.95, None],
        [1, -1, 0, None, "simple", 0.95, None],
        [1, 1, 3, 2, "simple", 0.95, None],
        [1, 1, 0, None, "simple", 0.4, None],
        ["x", 1, 0, None, "simple", 0.95, None],
    ]
    empty = {"decide": [], "significant": [], "fixed": []}
    errors = in_node({"vectors": empty, "wrong": wrong})["errors"]
    assert all(errors)
    assert errors[0] == "without a limit there is nothing to decide"
