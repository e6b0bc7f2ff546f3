"""What the Iterations screen has compared, previewed, adopted or lofted: long work, asked for by words."""

from __future__ import annotations

import shlex
from dataclasses import replace
from datetime import datetime
from pathlib import Path
from typing import ClassVar

from ledger.errors import FindingsError, Severity
from ledger.model.plan import Plan
from ledger.model.progress import Progress
from ledger.operations.adopt_plan import Adopted
from ledger.operations.adopt_previewed import adopt_previewed
from ledger.operations.look_at_iterations import (
    IterationsView,
    Wanted,
    look_at_iterations,
    names_of,
)
from ledger.operations.open_build import Build
from ledger.reports.plain import clean, how_many, shortened
from ledger.tui.actions import Action
from ledger.tui.iterations_actions import ATTITUDES, FIGURES, HISTORY, ITERATION_ACTIONS, PARTS, UNFIT
from ledger.tui.iterations_typed import about_wanted, path_typed, same_words
from ledger.tui.list_screen import ListScreen, findings_listed
from ledger.tui.long_work import Job
from ledger.tui.messages import Message
from ledger.tui.work_screen import WorkScreen, first_words

_NAME = 12


class IterationsAsking(WorkScreen[Build]):
    """Knows which two are wanted, and has them compared; how that is drawn is the screen's."""

    WORD = "iterations"
    AREAS = (FIGURES, PARTS, UNFIT, HISTORY, ATTITUDES)
    ACTIONS: ClassVar[tuple[Action, ...]] = ITERATION_ACTIONS

    def __init__(self) -> None:
        super().__init__()
        self.wanted: Wanted | None = None
        self.compared: IterationsView | None = None
        self.compared_for: tuple[str, Wanted] | None = None
        self.sought: tuple[str, Wanted] | None = None
        self.adopting: Path | None = None
        self.asked: tuple[Plan, Path] | None = None

    def draw_all(self) -> None:
        """Every area anew."""

    # -- what is said

    def say(self, sign: str, text: str) -> None:
        """A line that stands until something else is asked for: beside its answer it would mislead."""
        self.messages = self.messages.with_one(Message(sign=sign, text=text, passing=True))
        self.draw_messages()

    def settle_said(self) -> None:
        """Something else is asked for."""
        self.messages = self.messages.settled()
        self.draw_messages()

    def hear_line(self, text: str) -> None:
        """Enter by hand."""
        self.settle_said()
        super().hear_line(text)

    def hear_scan(self, text: str) -> None:
        """A scan."""
        self.settle_said()
        super().hear_scan(text)

    # -- what is compared

    @property
    def names(self) -> tuple[str, ...]:
        """The iterations that count, oldest first."""
        return () if self.view is None else names_of(self.view.snapshot)

    def look(self, build: Build, now: datetime) -> Build:  # noqa: ARG002
        """In a thread: the build is all that is needed to know whether to compare anew."""
        return build

    def show(self, view: Build) -> None:  # noqa: ARG002  it is asked of self.view
        """The book as it stands; what is compared is reckoned anew where it changed."""
        self._compare()
        self.draw_all()

    def want(self, wanted: Wanted | None) -> None:
        """Compare these from now on; None is the current iteration with the one before."""
        self.settle_said()
        self.wanted = wanted
        self.asked = None
        self._compare()

    def wanted_now(self) -> Wanted | None:
        """What is wanted, as far as the book has it; None before it was read."""
        names = self.names
        if not names:
            return None
        wanted = self.wanted
        if wanted is None or wanted.a not in names or (wanted.b is not None and wanted.b not in names):
            wanted = Wanted(a=names[-2], b=names[-1]) if len(names) > 1 else Wanted(a=names[0], b=None)
        return replace(wanted, drawn=self.wide)

    def _compare(self, *, anew: bool = False) -> None:
        build, wanted = self.view, self.wanted_now()
        if build is None or wanted is None:
            return
        key = (build.snapshot.last_digest, wanted)
        if key in (self.compared_for, self.sought) and not anew:
            return
        self.sought = key

        def compare(progress: Progress) -> IterationsView | FindingsError:
            try:
                return look_at_iterations(build, wanted, progress)
            except FindingsError as error:
                return error

        self.long.begin(
            Job(
                about=about_wanted(wanted),
                do=compare,
                then=lambda found: self._took(key, found),
                undone=self._stand,
            )
        )

    def _took(self, key: tuple[str, Wanted], found: IterationsView | FindingsError) -> None:
        if self.sought != key:
            return
        if isinstance(found, FindingsError):
            self._refuse_all(found)
            self._stand()
            return
        self.compared_for, self.sought = key, None
        before = None if self.compared is None else self.compared.comparison
        self.compared = found
        comparison = found.comparison
        if comparison is not None and (
            before is None or (before.a, before.b) != (comparison.a, comparison.b)
        ):
            self.marks_back()
        if comparison is not None and comparison.findings:
            first = comparison.findings[0]
            more = len(comparison.findings) - 1
            sign = "STOP" if first.severity is Severity.STOP else "LOOK"
            self.say(sign, f"{first.where} {first.what}; {first.do}{f' (and {more} more)' if more else ''}")
        if self.adopting == key[1].folder and key[1].folder is not None:
            self._ask_to_adopt(key[1].folder)
        self.draw_all()
        self.draw_shell()

    def _stand(self) -> None:
        """What was sought is not to be had: what is shown is what is wanted again."""
        self.sought = self.adopting = None
        self.wanted = None if self.compared_for is None else self.compared_for[1]
        self.draw_all()

    def marks_back(self) -> None:
        """Another pair: every mark to the first row."""

    # -- preview and adopt

    def begin_preview(self, folder: Path, *, adopting: bool) -> None:
        """Compare the current plan with a folder's; `adopting` asks afterwards whether to take it in."""
        if not self.names:
            self.refuse("the book is still being read: type it again")
            return
        if not folder.is_dir():
            self.refuse(
                f"{folder}: there is no such folder; give the path of a folder with plan.toml in it", "STOP"
            )
            return
        self.adopting = folder if adopting else None
        self.wanted = Wanted(a=self.names[-1], b=None, folder=folder)
        self.asked = None
        # The files of a folder may have changed since it was looked at.
        self._compare(anew=True)

    def _ask_to_adopt(self, folder: Path) -> None:
        self.adopting = None
        found = self.compared
        if found is None or found.comparison is None:
            return
        if found.name_taken:
            self.refuse(
                "an iteration of this plan's name is in the book already: give the plan another name", "STOP"
            )
            return
        comparison = found.comparison
        self.asked = (comparison.plan_b, folder)
        many = len(comparison.no_longer_fits)
        cost = f"{how_many(many, 'built piece')} will no longer fit" if many else "all that is built fits"
        self.say("LOOK", f"{cost}. To adopt it type its name, {clean(comparison.b)}; Esc leaves it")
        self.draw_line()

    def _adopt(self, seen: Plan, folder: Path) -> None:
        app = self.ledger_app
        if app.crew.needs_badge(self.now()) or app.crew.by is None:
            self.refuse("who adopts it? scan your badge or type +JK, then the name again")
            return
        app.wall.look(app.last_logged_at)
        if app.wall.doubt is not None:
            self.refuse(f"{app.wall.doubt}: what time is it? type for example 14:25, or clock right")
            return
        self.asked = None
        by, now, book = app.crew.by, self.now(), app.book

        def adopt(progress: Progress) -> Adopted | FindingsError:
            try:
                return adopt_previewed(book, folder, seen, by=by, now=now, progress=progress)
            except FindingsError as error:
                return error

        self.long.begin(
            Job(about=f"adopting {clean(seen.name)}", do=adopt, then=self._adopted, gives_way=False)
        )
        self.draw_line()

    def _adopted(self, done: Adopted | FindingsError) -> None:
        if isinstance(done, FindingsError):
            self._refuse_all(done)
            return
        many = len(done.no_longer_fits)
        fits = f"{how_many(many, 'built piece')} no longer fit" if many else "all that is built fits"
        self._tell("ok", f"No. {done.seq}: {clean(done.iteration)} is adopted; {fits}")
        self.ring(1)
        self.wanted = None
        self.ledger_app.book_changed()

    # -- words

    def take_line(self, text: str) -> bool:
        """`preview FOLDER`, `adopt FOLDER`, `loft LAYOUT OUT`, `r1 r3`, or the name of an iteration."""
        word, _, rest = text.strip().partition(" ")
        rest = rest.strip()
        match word.casefold():
            case "preview" | "adopt" if rest:
                self.begin_preview(path_typed(rest), adopting=word.casefold() == "adopt")
                return True
            case "loft" if rest:
                self._begin_loft(rest)
                return True
        return self._take_names(text)

    def field_takes(self, text: str, *, scanned: bool) -> bool:
        """The name of the plan that is to be adopted, typed: never a scan, never Enter alone."""
        if self.asked is None or scanned or not same_words(text, self.asked[0].name):
            return False
        self._adopt(*self.asked)
        return True

    def prompt(self) -> str:
        """While a plan waits for its name, the line says so."""
        if self.asked is None:
            return super().prompt()
        return f"adopt? type {shortened(self.asked[0].name, _NAME)}: "

    def do_leave_slip(self) -> None:
        """Esc: not adopted; else as everywhere."""
        self.settle_said()
        if self.asked is not None:
            self.asked = None
            self.say("", "not adopted; the preview stands until another comparison is asked for")
        super().do_leave_slip()

    def _take_names(self, text: str) -> bool:
        names = {name.casefold(): name for name in self.names}
        words = text.split()
        for cut in range(1, len(words)):
            a, b = (" ".join(part).casefold() for part in (words[:cut], words[cut:]))
            if a in names and b in names:
                self._want_two(names[a], names[b])
                return True
        one = names.get(" ".join(words).casefold())
        if one is not None:
            self._want_one(one)
        elif len(words) == 2 and (words[0].casefold() in names or words[1].casefold() in names):
            wrong = words[0] if words[0].casefold() not in names else words[1]
            known = ", ".join(map(clean, self.names))
            self.refuse(f"the book has no iteration {wrong}; it has {known}", "STOP")
        else:
            return False
        return True

    def _want_one(self, name: str) -> None:
        if len(self.names) < 2:
            self.refuse(f"{clean(name)} is the only iteration: there is nothing to compare it with yet")
        elif name == self.names[-1]:
            self.want(None)
        else:
            self.want(Wanted(a=name, b=self.names[-1]))

    def _want_two(self, a: str, b: str) -> None:
        if a == b:
            self.refuse(f"{clean(a)} and {clean(b)} are the same iteration: type two that differ", "STOP")
        else:
            self.want(Wanted(a=a, b=b))

    def do_compare_older(self) -> None:
        """Left."""
        self._step(-1)

    def do_compare_newer(self) -> None:
        """Right."""
        self._step(1)

    def do_compare_latest(self) -> None:
        """The word."""
        self.want(None)

    def do_compare_anew(self) -> None:
        """The word."""
        self._compare(anew=True)

    def _step(self, by: int) -> None:
        names, wanted = self.names, self.wanted_now()
        if len(names) < 2 or wanted is None:
            self.refuse("there is one iteration: nothing to compare it with yet")
            return
        at = names.index(wanted.b) if wanted.b is not None else len(names)
        if not 1 <= at + by < len(names):
            self.say("", f"there is none {'newer' if by > 0 else 'older'}")
            return
        self.want(Wanted(a=names[at + by - 1], b=names[at + by]))

    def do_preview(self) -> None:
        """The word alone says what to write."""
        self.say("LOOK", "write the folder after it, for example: preview plans/r4")

    def do_adopt(self) -> None:
        """The word alone: what is previewed; else it says what to write."""
        wanted = self.wanted
        if wanted is not None and wanted.folder is not None:
            self.begin_preview(wanted.folder, adopting=True)
        else:
            self.say("LOOK", "write the folder after it, for example: adopt plans/r4")

    # -- loft

    def do_loft(self) -> None:
        """The word alone says what to write."""
        self.say("LOOK", "write the layout file and the folder to make: loft wing.toml plans/r4")

    def _begin_loft(self, rest: str) -> None:
        try:
            words = shlex.split(rest)
        except ValueError:
            words = []
        if len(words) != 2:
            wanted = "write two paths, the layout file and the folder to make: loft wing.toml plans/r4"
            self.refuse(wanted, "STOP")
            return
        layout, out = (Path(word).expanduser() for word in words)

        def loft(progress: Progress) -> FindingsError | None:
            from ledger.operations.loft_wing import loft_wing

            try:
                loft_wing(layout, out, progress=progress)
            except FindingsError as error:
                return error
            return None

        def then(trouble: FindingsError | None) -> None:
            if trouble is not None:
                self._refuse_all(trouble)
                return
            self._tell("ok", f"{clean(str(out))} is made; preview {clean(str(out))} compares it")
            self.ring(1)

        self.long.begin(Job(about=f"lofting {clean(layout.name)}", do=loft, then=then, gives_way=False))

    def _tell(self, sign: str, text: str) -> None:
        """How long work ended: here, and on the screen that is up by then."""
        self.say(sign, text)
        up = self.ledger_app.work_screen
        if up is not None and up is not self:
            up.say(sign, f"iterations: {text}")

    def _refuse_all(self, error: FindingsError) -> None:
        self.adopting = None
        self._tell("STOP", first_words(error))
        self.ring(2)
        # Whoever has gone on to another screen meanwhile is not torn away from it.
        if len(error.findings) > 1 and self.is_current:
            self.app.push_screen(ListScreen("REFUSED", findings_listed(error.findings)))
