"""Tests of the job room."""
