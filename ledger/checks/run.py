"""Every rule, in one explicit tuple, and the findings that nobody has accepted."""

from __future__ import annotations

from ledger.checks.attitude_without_mirror import attitude_without_mirror
from ledger.checks.batch_account_short import batch_account_short
from ledger.checks.bonded_without_peel_ply_recorded import bonded_without_peel_ply_recorded
from ledger.checks.built_to_earlier_iteration import built_to_earlier_iteration
from ledger.checks.can_be_overfilled import can_be_overfilled
from ledger.checks.caught_air import caught_air
from ledger.checks.cell_not_aired import cell_not_aired
from ledger.checks.cells_overlap import cells_overlap
from ledger.checks.cut_turned import cut_turned
from ledger.checks.cut_twice import cut_twice
from ledger.checks.density_out_of_range import density_out_of_range
from ledger.checks.dry_cell import dry_cell
from ledger.checks.fabric_wet_with_paste import fabric_wet_with_paste
from ledger.checks.facts import Facts, Rule
from ledger.checks.feed_flow_unknown import feed_flow_unknown
from ledger.checks.few_adverse_attitudes import few_adverse_attitudes
from ledger.checks.held_used import held_used
from ledger.checks.instrument_out_of_calibration import instrument_out_of_calibration
from ledger.checks.lost_overboard import lost_overboard
from ledger.checks.lot_expired import lot_expired
from ledger.checks.mass_off_plan import mass_off_plan
from ledger.checks.mass_unknown import mass_unknown
from ledger.checks.mix_ratio_out import mix_ratio_out
from ledger.checks.mix_ratio_out_used import mix_ratio_out_used
from ledger.checks.mix_ratio_unprovable import mix_ratio_unprovable
from ledger.checks.names_something_withdrawn import names_something_withdrawn
from ledger.checks.no_drain import no_drain
from ledger.checks.opening_far_from_wall import opening_far_from_wall
from ledger.checks.outlet_in_no_feed import outlet_in_no_feed
from ledger.checks.peel_ply_not_said import peel_ply_not_said
from ledger.checks.ply_missing import ply_missing
from ledger.checks.ply_not_in_plan import ply_not_in_plan
from ledger.checks.ply_of_other_material import ply_of_other_material
from ledger.checks.ply_out_of_order import ply_out_of_order
from ledger.checks.ply_twice import ply_twice
from ledger.checks.ply_wrong_way import ply_wrong_way
from ledger.checks.pocket_not_counted import pocket_not_counted
from ledger.checks.pot_life_exceeded import pot_life_exceeded
from ledger.checks.readings_disagree import readings_disagree
from ledger.checks.resin_share_far_off import resin_share_far_off
from ledger.checks.scrapped_used import scrapped_used
from ledger.checks.sheet_over_cut import sheet_over_cut
from ledger.checks.weighed_before_last_ply import weighed_before_last_ply
from ledger.checks.weighed_with_nothing_fitted import weighed_with_nothing_fitted
from ledger.checks.weighed_with_things_missing import weighed_with_things_missing
from ledger.errors import Finding
from ledger.model.acts import Accept
from ledger.model.snapshot import Snapshot

RULES: tuple[Rule, ...] = (
    attitude_without_mirror,
    batch_account_short,
    bonded_without_peel_ply_recorded,
    built_to_earlier_iteration,
    can_be_overfilled,
    caught_air,
    cell_not_aired,
    cells_overlap,
    cut_turned,
    cut_twice,
    density_out_of_range,
    dry_cell,
    fabric_wet_with_paste,
    feed_flow_unknown,
    few_adverse_attitudes,
    held_used,
    instrument_out_of_calibration,
    lost_overboard,
    lot_expired,
    mass_off_plan,
    mass_unknown,
    mix_ratio_out,
    mix_ratio_out_used,
    mix_ratio_unprovable,
    names_something_withdrawn,
    no_drain,
    opening_far_from_wall,
    outlet_in_no_feed,
    peel_ply_not_said,
    ply_missing,
    ply_not_in_plan,
    ply_of_other_material,
    ply_out_of_order,
    ply_twice,
    ply_wrong_way,
    pocket_not_counted,
    pot_life_exceeded,
    readings_disagree,
    resin_share_far_off,
    scrapped_used,
    sheet_over_cut,
    weighed_before_last_ply,
    weighed_with_nothing_fitted,
    weighed_with_things_missing,
)


def run_rules(facts: Facts) -> tuple[Finding, ...]:
    """What every rule notices now, gravest first, less what was accepted and has not changed since."""
    return gravest_first(still_open(facts.snapshot, every_finding(facts)))


def every_finding(facts: Facts) -> tuple[Finding, ...]:
    """What every rule notices, accepted or not."""
    return tuple(finding for rule in RULES for finding in rule(facts))


def still_open(snapshot: Snapshot, findings: tuple[Finding, ...]) -> tuple[Finding, ...]:
    """The findings that no `accept` entry still covers."""
    accepted = tuple(logged.act for logged in snapshot.logged if isinstance(logged.act, Accept))
    return tuple(
        finding for finding in findings if not any(_covers(act, finding, snapshot) for act in accepted)
    )


def facts_to_accept(snapshot: Snapshot, findings: tuple[Finding, ...], code: str, what: str) -> str | None:
    """What an `accept` entry keeps of the findings it accepts, one a line; None where there are none."""
    said = sorted(
        {finding.what for finding in findings if finding.code == code and _is_about(finding, what, snapshot)}
    )
    return "\n".join(said) or None


def gravest_first(findings: tuple[Finding, ...]) -> tuple[Finding, ...]:
    """STOP before LOOK before note; within one severity as they came."""
    order = ("stop", "look", "note")
    return tuple(sorted(findings, key=lambda finding: order.index(finding.severity.value)))


def _covers(act: Accept, finding: Finding, snapshot: Snapshot) -> bool:
    if act.finding != finding.code or not _is_about(finding, act.what, snapshot):
        return False
    # An acceptance with no facts would cover whatever the rule comes to say later.
    return act.facts is not None and finding.what in act.facts.split("\n")


def _is_about(finding: Finding, what: str, snapshot: Snapshot) -> bool:
    wanted = what.casefold()
    names = {str(finding.where), finding.where.thing or ""}
    piece = snapshot.pieces.get(finding.where.thing or "")
    if piece is not None:
        names |= {piece.number, piece.name}
    if finding.where.entry is not None:
        names |= {str(finding.where.entry), f"entry {finding.where.entry}"}
    return wanted != "" and wanted in {name.casefold() for name in names}
