"""What a position demands, and which parts of the catalog meet it."""
