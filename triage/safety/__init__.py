"""Safe to open, worth repairing, proved afterwards: cautions, gates, limits, retest, decision."""
