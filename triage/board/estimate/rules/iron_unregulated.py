"""Nothing behind the reservoir: the label is its mean voltage at the rated load and nominal mains."""

from triage.board.estimate.design import Design, Draws

FAMILIES = ("linear_unregulated",)


def reservoir_ripple(design: Design) -> Draws:
    """Usual share of the rated output, peak to peak. [V]"""
    return design["unregulated_ripple_share"] * design.label.output_voltage


def reservoir_crest(design: Design) -> Draws:
    """Mean of the label and half the ripple, at nominal mains; the label is rounded. [V]"""
    return design.label.output_voltage * design["unregulated_accuracy"] + 0.5 * design["reservoir_ripple"]
