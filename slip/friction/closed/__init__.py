"""Closed forms of partial slip: pressed contacts, laps and rows of bolts, hysteresis loops, the rough face."""
