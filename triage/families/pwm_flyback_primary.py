"""Flyback with integrated switch and primary-side regulation: the chip samples the auxiliary winding, there is no optocoupler.

The frequency falls with the load; the mean output current is limited by the share of the period in which the secondary conducts.
Without its auxiliary supply the chip stops at its lockout and tries again.
"""

from triage.families.family import Family

FAMILY = Family(
    key="pwm_flyback_primary",
    title="flyback with integrated switch, regulated on the primary side",
    switch_role="integrated switch",
    start_roles=(),
    output_roles=("output capacitor",),
    supply_role="controller supply capacitor",
    solution=1,
    look=("one chip with four to eight legs and no transistor beside it", "no optocoupler", "a transformer with three windings"),
    largest_step=1e-5,
    swing_low=0.1,
)
