"""From the checked model to numbers: one tape, its values, hazards and extremes; verdicts."""
