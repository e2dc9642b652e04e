"""What was promised, what is expected, what was read: uncertainty, decision, frozen sheets, verdicts."""

from commission.acceptance.air_route import air_side
from commission.acceptance.budget import Budget, Component, Measured, combine, propagate, spread_of
from commission.acceptance.capability import Capability, GuaranteeCapability, ReadingCapability, capability
from commission.acceptance.changes import Change, apply_change, smallest_change
from commission.acceptance.decision import Decision, decide, fixed, significant
from commission.acceptance.derived import Derived, derive
from commission.acceptance.evaluation import Evaluation, evaluate
from commission.acceptance.expectation import Deviation, Expectation, deviation, expect
from commission.acceptance.freezing import grid_of, make_sheet
from commission.acceptance.guarantee import Carried, Terms, carry, terms_of
from commission.acceptance.impossible import Impossible, impossible
from commission.acceptance.instruments import Reading, assumed_budget, instrument_budget, measure
from commission.acceptance.judgement import GuaranteeVerdict, Judgement, Mode, judge
from commission.acceptance.routes import (
    Refusal,
    RouteResult,
    closure,
    compressor_heat_balance,
    liquid_side,
)
from commission.acceptance.sheet import SheetError, Target, TestSheet
from commission.acceptance.sheet_text import read_sheet
from commission.acceptance.standstill import Standstill, standstill
from commission.acceptance.steadiness import Steadiness, steadiness
from commission.acceptance.tolerances import LibraryTolerance, deciding_tolerance, tolerances

__all__ = [
    "Budget",
    "Capability",
    "Carried",
    "Change",
    "Component",
    "Decision",
    "Derived",
    "Deviation",
    "Evaluation",
    "Expectation",
    "GuaranteeCapability",
    "GuaranteeVerdict",
    "Impossible",
    "Judgement",
    "LibraryTolerance",
    "Measured",
    "Mode",
    "Reading",
    "ReadingCapability",
    "Refusal",
    "RouteResult",
    "SheetError",
    "Standstill",
    "Steadiness",
    "Target",
    "Terms",
    "TestSheet",
    "air_side",
    "apply_change",
    "assumed_budget",
    "capability",
    "carry",
    "closure",
    "combine",
    "compressor_heat_balance",
    "decide",
    "deciding_tolerance",
    "derive",
    "deviation",
    "evaluate",
    "expect",
    "fixed",
    "grid_of",
    "impossible",
    "instrument_budget",
    "judge",
    "liquid_side",
    "make_sheet",
    "measure",
    "propagate",
    "read_sheet",
    "significant",
    "smallest_change",
    "spread_of",
    "standstill",
    "steadiness",
    "terms_of",
    "tolerances",
]
