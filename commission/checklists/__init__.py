"""Checklists: what to do on site and in which order, as data; values come from plant and predictions."""

from commission.checklists.library import ChecklistError
from commission.checklists.rendering import Target
from commission.checklists.stages import Item, Stage, stages
from commission.checklists.together import target_with

__all__ = ["ChecklistError", "Item", "Stage", "Target", "stages", "target_with"]
