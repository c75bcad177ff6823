"""Where do interesting planes and Lagrangians come from? Formulas and random choices."""
