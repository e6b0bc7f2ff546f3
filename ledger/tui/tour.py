"""Through the sample build in six acts. An act is over when the book or a screen shows that it was done."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass

from ledger.model.acts import Lay, Mix, Weigh
from ledger.model.entry import Logged
from ledger.model.snapshot import Snapshot

SKIN = "SKIN.UPR-L"
INVENTED = "Invented build, nothing here flies"
DONE = "The six acts are done: help and actions say the rest, leave ends"

# The cup of the sample that was mixed with too much hardener.
BAD_CUP = "B014Z"

Seen = frozenset[str]


@dataclass(frozen=True, slots=True, kw_only=True)
class Act:
    """One act: what to do, the figure that then stands on the screen, and what to look at once there."""

    number: int
    says: str
    figure: str
    over: Callable[[tuple[Logged, ...], Seen], bool]
    screen: str = "bench"
    there: str = ""


def _laid(logged: tuple[Logged, ...], _: Seen) -> bool:
    laid = (one.act for one in logged if isinstance(one.act, Lay))
    return any(act.piece == f"{SKIN}/1" and act.step == 3 for act in laid)


def _weighed(logged: tuple[Logged, ...], _: Seen) -> bool:
    return any(isinstance(one.act, Weigh) and one.act.what == "RIB.A6-R/1" for one in logged)


def _mixed(logged: tuple[Logged, ...], _: Seen) -> bool:
    # The sample's own last cup was mixed before the ply of the first act.
    laid = next((n for n, one in enumerate(logged) if isinstance(one.act, Lay) and _laid((one,), _)), None)
    return laid is not None and any(isinstance(one.act, Mix) for one in logged[laid:])


ACTS: tuple[Act, ...] = (
    Act(
        number=1,
        says="lay ply 3: B029L Enter, +MT Enter, log Enter",
        figure="needs 510 g",
        over=_laid,
    ),
    Act(
        number=2,
        says="RIB.A6-L Enter, 14.9 Enter; then RIB.A6-R the same",
        figure="off +0.7 g",
        over=_weighed,
    ),
    Act(
        number=3,
        says="a cup: mix Enter, 200 Enter, 54 Enter, log Enter",
        figure="pour hardener 54.0 g",
        over=_mixed,
    ),
    Act(
        number=4,
        says="type weights: is the wing heavy by chance, and where?",
        figure="HEAVY 1.19 kg, not chance",
        over=lambda _, seen: "weights" in seen,
        screen="weights",
        there="LEFT skins are 0.667 kg heavy, LOOK; most of it is resin",
    ),
    Act(
        number=5,
        says="type fuel: what stays behind which drain?",
        figure="L6 0.7 L",
        over=lambda _, seen: "fuel" in seen,
        screen="fuel",
        there="left tank, End until best climb: 0.7 L in L6, behind drain L4-L6",
    ),
    Act(
        number=6,
        says="type trace, then B014Z: the cup mixed wrong",
        figure="IN 1 piece, it is FITTED: 824.0 g of 824.0 g",
        over=lambda _, seen: BAD_CUP in seen,
        screen="trace",
    ),
)


def leads(snapshot: Snapshot) -> bool:
    """Whether this is the sample's book: the only one there are acts for."""
    return snapshot.plan.title.startswith("Invented") and BAD_CUP in snapshot.batches


def act_now(logged: tuple[Logged, ...], seen: Iterable[str]) -> Act | None:
    """The first act not over yet; None once all are."""
    known = frozenset(seen)
    return next((act for act in ACTS if not act.over(logged, known)), None)


def words_on(screen: str, act: Act | None) -> str:
    """What a screen other than the bench says of the acts: what to look at there, then what is next."""
    here = next((one for one in ACTS if one.screen == screen and one.there), None)
    look = "" if here is None else f" Act {here.number}: {here.there}."
    going_on = "" if act is None or here is None else " Next,"
    return f"{INVENTED}.{look}{going_on} {line_of(act)}"


def line_of(act: Act | None) -> str:
    """The act in one line."""
    return DONE if act is None else f"act {act.number} of {len(ACTS)}: {act.says}"
