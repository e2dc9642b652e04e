"""What was promised, what is expected, what was read: uncertainty, decision, frozen sheets, verdicts."""
