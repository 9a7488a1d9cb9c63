"""Readers of printed codes, one module a kind of code.

Each module with a function ``read_marking(text: str) -> Iterator[Decoded]`` is found by
``triage.replacement.marking_codes``; the text it gets is cleaned (printable ASCII, ``u`` for micro, ``ohm``
for the ohm sign) and not longer than a line of print.
"""
