"""Which part failed: hypotheses, priors, expected readings, belief, next reading, verdict."""
