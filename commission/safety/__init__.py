"""Safety figures with document, edition and mark: pressures, evacuation, charge, leak checks, hazards, the card."""

from commission.safety.card import CardSection, EmergencyCard, emergency_card
from commission.safety.charge import ADVICE, SpaceCharge, charge_limits
from commission.safety.facts import MARKS, Fact, fact, facts
from commission.safety.figure import QUANTITY_TITLES, Figure, Figures
from commission.safety.figure import TITLES as FIGURE_TITLES
from commission.safety.figures import safety_figures
from commission.safety.formulas import nitrogen_pressure, tonnes
from commission.safety.hot_water import warm_volume_below_element
from commission.safety.leaks import LeakDuty, label_text, leak_duty, leak_duty_of
from commission.safety.limit_order import (
    LimitOrder,
    OutOfOrder,
    PressureStep,
    ReliefSetting,
    limit_order,
    relief_settings,
)
from commission.safety.limits import ChargeLimit
from commission.safety.market import MarketDate, market_dates, rated_capacity
from commission.safety.oils import Oil, oil_named
from commission.safety.people import Hazards, Level, hazards
from commission.safety.register import fluid_of, substance_of
from commission.safety.relief import ReliefDuty, relief_duties
from commission.safety.stamped import hottest_ambient, relief_valves
from commission.safety.strength import strength_test_steps
from commission.safety.substance import Substance

__all__ = [
    "ADVICE",
    "FIGURE_TITLES",
    "MARKS",
    "QUANTITY_TITLES",
    "CardSection",
    "ChargeLimit",
    "EmergencyCard",
    "Fact",
    "Figure",
    "Figures",
    "Hazards",
    "LeakDuty",
    "Level",
    "LimitOrder",
    "MarketDate",
    "Oil",
    "OutOfOrder",
    "PressureStep",
    "ReliefDuty",
    "ReliefSetting",
    "SpaceCharge",
    "Substance",
    "charge_limits",
    "emergency_card",
    "fact",
    "facts",
    "fluid_of",
    "hazards",
    "hottest_ambient",
    "label_text",
    "leak_duty",
    "leak_duty_of",
    "limit_order",
    "market_dates",
    "nitrogen_pressure",
    "oil_named",
    "rated_capacity",
    "relief_duties",
    "relief_settings",
    "relief_valves",
    "safety_figures",
    "strength_test_steps",
    "substance_of",
    "tonnes",
    "warm_volume_below_element",
]
