"""Cautions, gates, limits of standards, retest."""
