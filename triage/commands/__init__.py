"""The sub-commands of the command line: each asks the bench one question and prints the answer as text or
JSON."""
