"""Points of an interface under Coulomb friction: the gross-slip load, and the steps that lead there."""
