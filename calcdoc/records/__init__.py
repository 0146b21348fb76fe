"""From evaluation to record: plain data with everything a page shows."""
