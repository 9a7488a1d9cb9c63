"""The screens: they show and ask, and compute nothing."""
