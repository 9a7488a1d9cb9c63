"""Fixed-frequency flyback: current-mode controller with lockout, external transistor, optocoupler and shunt reference.

The controller starts through a resistor from the bulk voltage and then lives on an auxiliary winding; when that fails to keep it
above its lockout it stops, waits for the start resistor, and tries again: the hiccup.
"""

from triage.families.family import Family

FAMILY = Family(
    key="pwm_flyback_opto",
    title="fixed-frequency flyback with current-mode controller, optocoupler and shunt reference",
    switch_role="power switch",
    start_roles=(),
    output_roles=("first output capacitor", "second output capacitor"),
    largest_step=4e-6,
    swing_low=0.1,
    supply_role="controller supply capacitor",
    solution=1,
    look=("a controller with six to eight legs", "a field-effect transistor on the primary side", "an optocoupler"),
)
