"""Bench companion for failed mains adapters.

The rooms, each seeing only those named after it: ``app`` and ``cli`` (show and ask), ``job`` (what is written down),
``diagnosis``, ``replacement``, ``safety`` (what it means), ``families`` and ``board`` (what the adapter is),
``physics`` (formulas on arrays). Inside, quantities are floats or arrays in SI units, temperatures in degC.
"""
