"""What is written down: entries, the job file, the report."""
