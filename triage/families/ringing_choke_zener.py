"""Self-oscillating flyback ("ringing choke") with half-wave input, regulated by a zener on an auxiliary winding.

The switch starts through a resistor from the bulk voltage; a feedback winding drives its base through a resistor and a
capacitor. During the flyback the same winding charges a negative rail that follows the output voltage; when the rail passes
the zener voltage less one junction, the zener takes base current away and the on-time shortens. All of this follows from the
circuit itself; the family only names the parts that the general solution must know.
"""

from triage.families.family import Family

FAMILY = Family(
    key="ringing_choke_zener",
    title="self-oscillating flyback, zener regulation on the primary side",
    switch_role="main switch",
    start_roles=("startup resistor", "main switch", "base drive resistor", "base drive capacitor", "base reset diode",
                 "flyback transformer"),
    step_relative=0.003,
    look=("one transistor on the primary side and no controller", "no optocoupler", "a transformer with three windings"),
)
