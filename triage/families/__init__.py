"""One module per adapter family: composes physics into the operating point of a board, healthy or faulty."""
