"""Step-down converter on rectified mains with an integrated high-side switch. Not insulated from the mains.

The chip's ground is the swinging node; a diode copies the output onto its feedback capacitor while the free-wheeling diode
conducts. Each pulse ends at the peak current; pulses are left out while the feedback is above its reference.
"""

from triage.families.family import Family

FAMILY = Family(
    key="buck_nonisolated",
    title="step-down converter with integrated switch, not insulated from the mains",
    switch_role="integrated switch",
    start_roles=(),
    output_roles=("output capacitor",),
    supply_role="switcher supply capacitor",
    solution=1,
    look=("one chip and a drum-shaped coil", "no transformer", "no optocoupler"),
    largest_step=4e-6,
    swing_low=0.2,
    swing_high=0.5,
    swing_pin="source",
)
