"""Traction, slip and energy in the interface."""
