"""From a brief and the stock at hand to a complete design, by numerical optimisation."""
