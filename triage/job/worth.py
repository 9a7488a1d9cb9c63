"""Whether a repair is worth while, as the safety room weighs it, for an open job."""

from collections.abc import Iterable
from typing import TYPE_CHECKING

from triage.job.display import plain
from triage.job.entries import replay
from triage.job.picture import view
from triage.job.views import OptionView, WorthView
from triage.job.workshop import own_drawers, own_shop
from triage.safety.decision import board_case, decide, upgrades

if TYPE_CHECKING:
    from triage.job.bench import Bench


def worth_of(bench: "Bench", new_price: float | None) -> WorthView:
    """Repair, replace or scrap, each with its expected cost.

    new_price: of a new adapter of the same rating [money of the shop]; None: that of shop.toml, else the house estimate by
    power.
    """
    own = own_shop()
    shop = own.shop
    if new_price is None:
        named = (str(bench.job.document["job"].get("profile", "")), bench.board.id, bench.board.title)
        new_price = next((own.new_adapter[name] for name in named if name in own.new_adapter), None)
    shown = view(bench, "")
    vetoes = tuple(f"the look at {item}" for item, look in sorted(bench.facts().looks) if look == "veto")
    over = upgrades(bench.board, bench.workings.known_stresses(bench.board), shop)
    fitted = [ref for ref, _ in replay(bench.job.entries).fitted]
    case = board_case(
        bench.board, shown.verdict.repair, shown.verdict.probability, over, fitted, vetoes=vetoes, new_price=new_price,
        in_drawers=_in_drawers(bench, shown.verdict.repair),
    )  # fmt: skip
    found = decide(case, shop, over)
    return WorthView(
        found.choice,
        plain(found.reason, 1000),
        tuple(OptionView(one.choice, one.cost, plain(one.text, 1000)) for one in found.options),
        found.vetoes,
        tuple(plain(one.text, 1000) for one in found.upgrades),
    )


def _in_drawers(bench: "Bench", refs: Iterable[str]) -> list[str]:
    """Those of the parts to replace for which something that may be fitted lies in the drawers."""
    if not own_drawers().items:
        return []
    return [ref for ref in refs if any(one.accepted and one.stock > 0 for one in bench.candidates(ref))]
