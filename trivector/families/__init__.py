"""Where do interesting planes and Lagrangians come from? Families and constructions."""
