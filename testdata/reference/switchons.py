"""Further transients from rest: opposite rails, doublers, chokes, regulators, inrush limiters."""
