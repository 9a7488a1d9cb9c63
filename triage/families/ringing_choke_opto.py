"""Self-oscillating flyback with a turn-off transistor, current sense and optocoupler feedback from the output.

The switch's current, sensed in its emitter lead, and the phototransistor's current together turn on a small transistor that
takes the base drive away and ends the on-time. At light load the converter runs in bursts.
"""

from triage.families.family import Family

FAMILY = Family(
    key="ringing_choke_opto",
    title="self-oscillating flyback with turn-off transistor and optocoupler",
    switch_role="main switch",
    start_roles=("startup resistor", "main switch", "base drive resistor", "base drive capacitor", "base reset diode",
                 "flyback transformer", "turn-off transistor", "emitter current-sense resistor"),
    output_roles=("output capacitor", "output capacitor before the filter coil", "output capacitor after the filter coil"),
    step_relative=0.003,
    look=("one power transistor and one small transistor on the primary side", "an optocoupler",
          "a transformer with three windings"),
)
