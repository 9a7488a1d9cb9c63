"""What an adapter is: parts, nodes, faults, readings, and the profile file."""
