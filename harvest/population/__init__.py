"""Population models: growth curves and what follows from them in closed form or by root finding."""

from harvest.population.curves import BY_NAME, CURVES, Curve, by_draw

__all__ = ["BY_NAME", "CURVES", "Curve", "by_draw"]
