"""What a good colleague would say about a plant before anybody visits it: findings with figures, place and source."""

from commission.review.finding import SEVERITIES, Figure, Finding, Severity
from commission.review.frame import Rule, review
from commission.review.thresholds import OWN_FILE, ReviewFileError, Threshold, thresholds, thresholds_of

__all__ = [
    "OWN_FILE",
    "SEVERITIES",
    "Figure",
    "Finding",
    "ReviewFileError",
    "Rule",
    "Severity",
    "Threshold",
    "review",
    "rules",
    "thresholds",
    "thresholds_of",
]


def rules() -> tuple[Rule, ...]:
    """Every rule with id, name, source and mark, in the order in which they are run."""
    from commission.review.table import RULES

    return RULES
