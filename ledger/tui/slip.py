"""A slip: one entry being written, field by field, from the one declaration of its kind. Frozen and pure."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from dataclasses import field as with_default
from datetime import datetime

from ledger.model import acts  # noqa: F401  the kinds are declared when this is imported
from ledger.model.comparison import EntryToMake
from ledger.model.declare import KINDS, Field, Kind, Takes
from ledger.operations.find_thing import FoundThing
from ledger.operations.keep_draft import Draft, draft_name
from ledger.operations.look_at_ply import PlyInHand
from ledger.operations.propose_entry import Proposal
from ledger.operations.see_changes import Change
from ledger.tui.crew import read_badge
from ledger.tui.field_text import (
    Find,
    Misfit,
    fit,
    is_number,
    split_names,
    takes_person,
    takes_thing,
    text_of,
    unit_of_label,
    with_unit,
)
from ledger.units import Display

_COMMON = (
    Field(word="at", key="at", takes=Takes.TEXT, tip="such as 10:15; empty is now", required=False),
    Field(word="remark", key="remark", takes=Takes.TEXT, tip="anything to remember", required=False),
)


_NUMBERS = frozenset({Takes.QUANTITY, Takes.MEASURE, Takes.WHOLE})
_LONGEST_BARE = 5


@dataclass(frozen=True, slots=True, kw_only=True)
class Refusal:
    """Why a text changed nothing."""

    text: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Slip:
    """`at_field` is the place of the mark; one past the last field stands `log`.

    `strayed` is true once a person moved the mark: then a scan must fit the very field it stands on.
    `filled` remembers the order of filling, so that undo empties the last. `original` is what stood in it
    when it was opened; `then` what belongs after it.
    """

    kind: str
    display: Display
    values: Mapping[str, str] = with_default(default_factory=dict)
    notes: Mapping[str, str] = with_default(default_factory=dict)
    proposed: frozenset[str] = frozenset()
    filled: tuple[tuple[str, str], ...] = ()
    at_field: int = 0
    strayed: bool = False
    stamped_at: datetime | None = None
    corrects: int | None = None
    original: Mapping[str, str] = with_default(default_factory=dict)
    changes: tuple[Change, ...] = ()
    ply: PlyInHand | None = None
    kept: str = ""
    apart: str = ""
    then: tuple[EntryToMake, ...] = ()

    @property
    def name(self) -> str:
        """What its draft is kept under."""
        return draft_name(self.kind, self.corrects, self.apart)

    @property
    def untouched(self) -> bool:
        """Whether nobody wrote anything: it stands as it was opened."""
        return self.stamped_at is None and dict(self.values) == dict(self.original)

    @property
    def declared(self) -> Kind:
        """The declaration it is built from."""
        return KINDS[self.kind]

    @property
    def fields(self) -> tuple[Field, ...]:
        """Every field in order, the common ones last."""
        return (*self.declared.fields, *_COMMON)

    @property
    def current(self) -> Field | None:
        """The field the mark is on; None on `log`."""
        return self.fields[self.at_field] if self.at_field < len(self.fields) else None

    def unit(self, field: Field) -> str | None:
        """The unit in the field's label."""
        return unit_of_label(self.kind, field, self.display)

    def value(self, word: str) -> str:
        """What stands in a field; empty where nothing does."""
        return self.values.get(word, "")

    @property
    def names(self) -> tuple[str, ...]:
        """Every name that stands in it: what it leans on."""
        found: list[str] = []
        for field in self.fields:
            if field.takes in (Takes.NAME, Takes.SHARE) and field.mints is None and self.value(field.word):
                text = self.value(field.word)
                parts = text.split(";") if field.takes is Takes.SHARE else [text]
                names = [part.split()[0] for part in parts if part.strip()]
                found += split_names(text) if field.many and field.takes is Takes.NAME else names
                found += [text] if field.takes is Takes.NAME else []
        if self.kind == "accept" or (self.kind == "withdraw" and self.value("seq")):
            found.append(self.value("what") or self.value("seq"))
        return tuple(dict.fromkeys(found))

    @property
    def missing(self) -> tuple[str, ...]:
        """Fields that must still be filled; of a group of alternatives, its first."""
        bare = [field.word for field in self.fields if field.required and not self.value(field.word)]
        open_groups = (g for g in self.declared.one_of if not any(self.value(word) for word in g))
        return (*bare, *(group[0] for group in open_groups))

    @property
    def cup_is_short(self) -> bool:
        """Whether the cups in it hold less than the ply in hand needs, so that the next one joins them."""
        if self.ply is None or not self.ply.needs_kg or not self.value("batches"):
            return False
        named = {part.split()[0].upper() for part in self.value("batches").split(";") if part.strip()}
        left = [cup.left_kg for cup in self.ply.cups if cup.number.upper() in named]
        return len(left) == len(named) and sum(max(0.0, one or 0.0) for one in left) < self.ply.needs_kg

    def _emptied_cups(self) -> str:
        """The cups named so far, each with all that was left in it: only then is a next one taken.

        Without the grams the ply would be halved between the cups, and the first over-drawn.
        """
        left = {cup.number.upper(): cup.left_kg for cup in (self.ply.cups if self.ply is not None else ())}
        parts = [part.strip() for part in self.value("batches").split(";") if part.strip()]
        rest = {part: 1000 * (left.get(part.upper()) or 0.0) for part in parts}
        return "; ".join(f"{part} {grams:.1f} g" if grams >= 0.1 else part for part, grams in rest.items())

    def in_group(self, word: str) -> bool:
        """Whether the field is one of several of which one is wanted."""
        return any(word in group for group in self.declared.one_of)

    # -- moving

    def moved(self, step: int) -> Slip:
        """The mark moved by hand."""
        place = max(0, min(len(self.fields), self.at_field + step))
        return replace(self, at_field=place, strayed=True)

    def passed(self) -> Slip:
        """The mark on the next field, by an Enter on nothing: a scan still finds its own field further on."""
        return replace(self, at_field=min(len(self.fields), self.at_field + 1))

    def gone_on(self) -> Slip:
        """The mark on the next field that nobody filled, past what stands there from last time."""
        place = self.at_field + 1
        while place < len(self.fields) and self.fields[place].word in self.proposed:
            place += 1
        return replace(self, at_field=place, strayed=False)

    def place_after(self, place: int) -> int:
        """The place of the next field, past alternatives to what is filled already."""
        for after in range(place + 1, len(self.fields)):
            groups = [group for group in self.declared.one_of if self.fields[after].word in group]
            if not any(self.value(word) for group in groups for word in group):
                return after
        return len(self.fields)

    def moved_to(self, word: str) -> Slip:
        """The mark on a field by name."""
        place = next((i for i, field in enumerate(self.fields) if field.word == word), self.at_field)
        return replace(self, at_field=place, strayed=False)

    def at_first_open(self) -> Slip:
        """The mark on the first field that must be filled, else on the first to be looked at."""
        missing = self.missing
        if missing:
            return self.moved_to(missing[0])
        # Never on `log`: the Enter that opened the slip may still be held down.
        return self.moved_to("lots" if self.kind == "lay" else self.fields[0].word)

    # -- filling

    def put(self, word: str, text: str, *, proposed: bool = False, note: str | None = None) -> Slip:
        """A field with this text; an empty one takes it away. Another choice of a group gives way."""
        before = self.value(word)
        values = {**self.values}
        notes = {**self.notes}
        if text:
            values[word] = text
            for group in self.declared.one_of:
                for other in group if word in group else ():
                    if other != word:
                        values.pop(other, None)
        else:
            values.pop(word, None)
        if note is not None:
            notes[word] = note
        return replace(
            self,
            values=values,
            notes=notes,
            proposed=self.proposed | {word} if proposed and text else self.proposed - {word},
            filled=self.filled if proposed else (*self.filled, (word, before)),
        )

    def undone(self) -> Slip | None:
        """Without what was filled last; None where nothing was."""
        if not self.filled:
            return None
        (word, before), rest = self.filled[-1], self.filled[:-1]
        return replace(self.put(word, before), filled=rest).moved_to(word)

    def typed(self, text: str, find: Find, by: str | None) -> Slip | Refusal:
        """Text typed by hand into the field the mark is on."""
        field = self.current
        if field is None:
            return Refusal(text=f"{text!r}: the mark is on log; Enter logs, Up goes back to the fields")
        if field.takes is Takes.SHARE and self.value(field.word) and self._is_mass(field, text):
            return self._with_mass(field, text)
        taken = fit(field, text, self.unit(field), find)
        if isinstance(taken, Misfit):
            further = self._typed_further(text, find)
            return further or Refusal(text=f"{_label(field)}: {taken.what}; {taken.do}")
        if field.word == "batches" and self.cup_is_short and taken not in self.value(field.word):
            taken = f"{self._emptied_cups()}; {taken}"
        if takes_person(field) and by is not None and taken == by:
            return Refusal(text=f"{taken} logs: somebody else must have seen it")
        return self.put(field.word, taken).gone_on()

    def _typed_further(self, text: str, find: Find) -> Slip | None:
        """A number typed that names what one of the next fields wants goes there, as a scan would."""
        thing = find(text)
        if thing is None:
            return None
        for field in self._where_it_may_go():
            named = field.takes in (Takes.NAME, Takes.SHARE)
            taken = self._fitted(field, text, thing, find) if named else None
            if taken is not None:
                return self._filled(field, taken)
        return None

    def scanned(self, text: str, find: Find, by: str | None) -> Slip | Refusal:
        """A scan: into the field the mark is on, or, while nobody moved the mark, where it belongs next."""
        thing = None if read_badge(text) else find(text)
        for field in self._where_it_may_go():
            taken = self._fitted(field, text, thing, find)
            if taken is None:
                continue
            if takes_person(field) and taken == by:
                return Refusal(text=f"{taken} logs: {_label(field)} wants somebody else's badge")
            return self._filled(field, taken)
        return Refusal(text=self._why_not(text, thing, find))

    def _where_it_may_go(self) -> tuple[Field, ...]:
        here = (self.current,) if self.current is not None else ()
        if self.strayed:
            return here
        # A required field that is still empty must be filled before anything else is.
        if self.current is not None and self.current.required and not self.value(self.current.word):
            return here
        # Never back: a rib scanned by mistake must not take the place of the skin in hand.
        after = self.fields[self.at_field + 1 :]
        return (*here, *(field for field in after if self._is_open(field)))

    def _is_open(self, field: Field) -> bool:
        return not self.value(field.word) or field.word in self.proposed or field.many

    def _fitted(self, field: Field, text: str, thing: FoundThing | None, find: Find) -> str | None:
        if field.takes in (Takes.NAME, Takes.SHARE) and field.mints is None:
            if takes_person(field):
                return read_badge(text)
            return text_of(thing) if thing is not None and takes_thing(field, thing) else None
        if field.mints is not None or (
            field.takes in (Takes.TEXT, Takes.OFFCUT) and field is not self.current
        ):
            return None
        if field.takes in _NUMBERS and not _is_reading(text, here=field is self.current):
            return None
        taken = fit(field, text, self.unit(field), find, scanned=True)
        return None if isinstance(taken, Misfit) else taken

    def _filled(self, field: Field, taken: str) -> Slip:
        before = self.value(field.word)
        adds = field.word not in self.proposed or (field.word == "batches" and self.cup_is_short)
        if field.many and before and adds:
            already = (
                [part.split()[0] for part in before.split(";")] if field.takes is not Takes.QUANTITY else []
            )
            if taken in already:
                return self
            joined = self._emptied_cups() if field.word == "batches" and self.cup_is_short else before
            taken = f"{joined}; {taken}"
        slip = self.put(field.word, taken)
        place = self.fields.index(field)
        # Scans of more pieces, cups or readings may follow, and so may the next field.
        return replace(slip, at_field=place if field.many else slip.place_after(place), strayed=False)

    def _is_mass(self, field: Field, text: str) -> bool:
        last = self.value(field.word).rsplit(";", 1)[-1].split()
        return len(last) == 1 and (is_number(text) or is_number(text.split(maxsplit=1)[0]))

    def _with_mass(self, field: Field, text: str) -> Slip | Refusal:
        mass = with_unit(text, self.unit(field))
        joined = f"{self.value(field.word)} {mass}"
        taken = fit(field, joined, self.unit(field), lambda name: _known(field, name))
        if isinstance(taken, Misfit):
            return Refusal(text=f"{_label(field)}: {taken.what}; {taken.do}")
        return self.put(field.word, joined).gone_on()

    def _why_not(self, text: str, thing: FoundThing | None, find: Find) -> str:
        badge = read_badge(text)
        said = f"badge {badge}" if badge else thing.says if thing is not None else f"{text}: nothing known"
        here = self.current
        wants = "the mark is on log" if here is None else f"{_label(here)}: {here.tip}"
        others = [
            _label(field)
            for field in self.fields
            if field is not here and self._fitted(field, text, thing, find) is not None
        ]
        where = f"; {' or '.join(others)} would take it" if others else ""
        if not others and thing is not None:
            where = "; put the slip away (Esc) and scan again, or look on the trace screen"
        return f"scanned {said}; {wants}{where}"

    # -- drafts and changes

    def draft(self, now: datetime, by: str | None, *, away: bool = False) -> Draft:
        """What is kept on disk."""
        return Draft(
            kind=self.kind,
            values=tuple(self.values.items()),
            kept_at=now,
            proposed=tuple(sorted(self.proposed)),
            stamped_at=self.stamped_at,
            corrects=self.corrects,
            by=by,
            original=tuple(self.original.items()),
            apart=self.apart,
            away=away,
        )

    def changed_under(self, changes: tuple[Change, ...]) -> Slip:
        """With those entries of others that it leans on; they must be looked at before it logs."""
        names = self.names
        touching = tuple(change for change in changes if change.touches(names))
        return replace(self, changes=(*self.changes, *touching)) if touching else self


def _is_reading(text: str, *, here: bool) -> bool:
    # The code on a package is digits too; a scale sends a unit, a sign or a point.
    if not is_number(text):
        return True
    return here and (len(text.strip()) <= _LONGEST_BARE or any(mark in text for mark in "+-.,"))


def new_slip(kind: str, display: Display, proposal: Proposal) -> Slip:
    """A slip as proposed; the mark on the first field that nobody has filled."""
    slip = Slip(kind=kind, display=display, ply=proposal.ply)
    for word, text in proposal.values.items():
        slip = slip.put(word, text, proposed=True)
    slip = replace(slip, notes=dict(proposal.notes), original=dict(slip.values))
    return slip.at_first_open()


def slip_of(draft: Draft, display: Display) -> Slip:
    """A draft brought back."""
    known = {field.word for field in (*KINDS[draft.kind].fields, *_COMMON)}
    slip = Slip(
        kind=draft.kind,
        display=display,
        values={word: text for word, text in draft.values if word in known},
        proposed=frozenset(draft.proposed),
        stamped_at=draft.stamped_at,
        corrects=draft.corrects,
        original=dict(draft.original),
        apart=draft.apart,
        kept=f"draft of {draft.kept_at:%d %b %H:%M}",
    )
    return slip.at_first_open()


def _known(field: Field, name: str) -> FoundThing:
    return FoundThing(kind=field.things[0], number=name, name=name, says=name)


def _label(field: Field) -> str:
    return field.word.replace("_", " ")
