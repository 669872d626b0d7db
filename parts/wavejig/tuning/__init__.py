"""From target to numbers and back: tuning, yield, and what a measured sweep says."""
