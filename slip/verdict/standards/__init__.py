"""Slip resistance by published standards: one module each, with formulas and a `judge` that returns a Judgement."""
