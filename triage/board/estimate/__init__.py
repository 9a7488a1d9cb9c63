"""Boards that nobody has drawn: a family proposed from what is seen, every unread part estimated from the label.

A template says which parts a family has and how they are joined, the table of roles what a part in a role is, the table of
practice what designers usually choose, the rules how a value follows from label and choices. Nothing here reads a job or a
catalog; markings that need the catalog are the work of ``triage.job.intake``.
"""
