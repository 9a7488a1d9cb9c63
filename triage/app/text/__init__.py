"""Pure functions from the bench's records to marked lines; tested without a terminal."""
