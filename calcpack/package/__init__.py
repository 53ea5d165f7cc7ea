"""Sheets that feed each other: who takes what from whom, in which order to solve, what need not be done again."""
