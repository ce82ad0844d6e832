"""The clamp force that is left: tightening, springs, losses, and what the loads relieve."""
