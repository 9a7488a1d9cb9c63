"""Formulas on arrays: networks, waveforms, heat, life, failure rate. No file, no screen."""
