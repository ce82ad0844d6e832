"""Saying it: terminal, machine, page, equations. The report shows what the stages found and computes nothing."""
