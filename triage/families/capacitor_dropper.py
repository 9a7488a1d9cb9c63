"""Capacitor dropper: a capacitor in series with the mains sets the current, a zener the voltage. Not insulated from the mains.

In one half-wave the capacitor charges the reservoir through the rectifier until the zener takes the rest; in the other the zener
conducts forward and turns the capacitor's charge round. More load than the capacitor passes lowers the output at once.
"""

from triage.families.family import Family

FAMILY = Family(
    key="capacitor_dropper",
    title="capacitor dropper with zener, not insulated from the mains",
    switch_role="",
    start_roles=(),
    bulk_role="",
    output_roles=("reservoir capacitor",),
    look=("a large film capacitor in series with the mains", "no transformer", "a zener and one or two diodes"),
    largest_step=1e-4,
    slow=True,
    starts_empty=True,
)
