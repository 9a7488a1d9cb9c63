"""Iron-core mains transformer, rectifier and reservoir capacitor, and nothing behind them.

The output is that of the reservoir: it rises by a third and more without load and carries the ripple of the mains. Half wave,
centre tap or bridge follow from the parts on the board.
"""

from triage.families.family import Family

FAMILY = Family(
    key="linear_unregulated",
    title="mains transformer, rectifier and reservoir, unregulated",
    switch_role="",
    start_roles=(),
    bulk_role="",
    output_roles=("reservoir capacitor",),
    look=("a heavy iron transformer", "no high-voltage capacitor", "no regulator", "two or four diodes"),
    largest_step=1e-4,
    slow=True,
    starts_empty=True,
)
