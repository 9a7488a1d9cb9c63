"""Iron-core mains transformer, rectifier, reservoir capacitor, and a three-terminal regulator or none.

Nothing switches; the longest time constants are those of the reservoir and of the transformer's magnetising current.
"""

from triage.families.family import Family

FAMILY = Family(
    key="linear_regulated",
    title="mains transformer, rectifier, reservoir and three-terminal regulator",
    switch_role="",
    start_roles=(),
    bulk_role="",
    output_roles=("output capacitor", "reservoir capacitor"),
    look=("a heavy iron transformer", "no high-voltage capacitor", "a three-legged regulator or none"),
    largest_step=1e-4,
    slow=True,
)
