"""Screens of the app, one a file; each shows records of the bench and asks it, and computes nothing."""
