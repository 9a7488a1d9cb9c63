"""Design equations run backwards: one module for each part of a circuit, found by themselves.

``FAMILIES`` of a module names the families its rules hold for (empty: all). Each public function takes the design and gives the
draws of the quantity it is named after; the first sentence of its docstring is shown as the reason of an estimate, a unit in
brackets behind it.
"""
