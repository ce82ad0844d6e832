"""Partial slip of a pressed contact by two routes: the closed form of its profile, and the frictional step on half-spaces."""
