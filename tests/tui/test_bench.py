"""The bench, by hand and by reader, on a small book."""

from __future__ import annotations

from collections.abc import Callable
from contextlib import AbstractAsyncContextManager
from pathlib import Path
from typing import Any

from ledger.operations.log_entry import log_entry
from ledger.operations.open_build import open_build

OpenBench = Callable[..., AbstractAsyncContextManager[Any]]


def entries(book: Path) -> tuple[Any, ...]:
    return open_build(book).logged


def last_entry(book: Path) -> Any:
    return entries(book)[-1]


# -- weighing without a slip


async def test_scan_number_enter_is_a_weighing(small_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(small_book) as bench:
        await bench.scan("RIB.01-L")
        assert "312.0 g" in bench.shown
        await bench.type("313.4")
        entry = last_entry(small_book)
        assert (entry.kind, entry.by) == ("weigh", "JK")
        assert entry.act.what == "RIB.01-L/1"
        assert entry.act.reading_kg == (0.3134,)
        assert any("expected 312.0 g" in line and "off +1.4 g" in line for line in bench.said), bench.said
        assert bench.app.rung == [1]


async def test_a_reading_sent_by_the_scale_waits_for_a_hand_or_a_tag(
    small_book: Path, open_bench: OpenBench
) -> None:
    before = len(entries(small_book))
    async with open_bench(small_book) as bench:
        await bench.scan("RIB.01-L")
        await bench.scan("+  313.4 g")
        assert len(entries(small_book)) == before
        await bench.scan("TAG LOG")
        assert last_entry(small_book).act.reading_kg == (0.3134,)


async def test_a_reading_outside_wants_a_word_and_names_the_opposite_hand(
    small_book: Path, open_bench: OpenBench, at_nine_thirty: Any
) -> None:
    for side in "LR":
        log_entry(
            small_book,
            "cut",
            {"pieces": f"RIB.01-{side}", "sheet": "SHEET-A"},
            by="MT",
            now=at_nine_thirty,
        )
    before = len(entries(small_book))
    async with open_bench(small_book) as bench:
        await bench.scan("RIB.01-L")
        await bench.type("350")
        await bench.key("enter", "enter", "enter")
        assert len(entries(small_book)) == before
        assert bench.app.rung[-1] == 2
        assert "it fits RIB.01-R/1, the opposite hand: type keep, or scan a badge" in bench.said[-1]
        assert "it fits RIB.01-R/1" in bench.shown
        await bench.scan("keep")
        assert len(entries(small_book)) == before
        await bench.type("keep")
        assert last_entry(small_book).act.reading_kg == (0.35,)


async def test_a_badge_keeps_a_reading_outside(small_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(small_book) as bench:
        await bench.scan("RIB.01-L")
        await bench.type("900")
        await bench.scan("BADGE MT")
        entry = last_entry(small_book)
        assert (entry.kind, entry.by, entry.act.reading_kg) == ("weigh", "MT", (0.9,))


async def test_a_weigh_slip_outside_its_band_is_kept_by_a_word_only(
    small_book: Path, open_bench: OpenBench
) -> None:
    before = len(entries(small_book))
    async with open_bench(small_book) as bench:
        for text in ("weigh", "RIB.01-L", "900", "log", "log"):
            await bench.type(text)
        assert len(entries(small_book)) == before
        assert "type keep, or scan a badge" in bench.said[-1]
        await bench.type("keep")
        assert last_entry(small_book).act.reading_kg == (0.9,)


# -- laying up and cutting


async def test_a_skin_of_seven_plies_is_logged_with_no_key_but_scans(
    small_book: Path, open_bench: OpenBench
) -> None:
    before = len(entries(small_book))
    cloth = {1: "GLASS-A", 4: "FOAM-A", 7: "PEEL-A"}
    async with open_bench(small_book) as bench:
        bench.only_scans = True
        await bench.scan("BADGE JK")
        await bench.scan("SKIN.UPR-L")
        await bench.scan("TAG NEW CUP")
        for code in ("RESIN-A", "+ 600.0 g", "HARD-A", "+ 162.0 g", "TAG LOG"):
            await bench.scan(code)
        cup = last_entry(small_book).act.minted[0].number
        await bench.scan("SKIN.UPR-L")
        for step in range(1, 8):
            await bench.scan("TAG NEXT PLY")
            slip = bench.app.bench.desk.slip
            assert slip.value("step") == str(step), (bench.said, slip)
            await bench.scan(cloth.get(step, "TWILL-A"))
            if step == 2:
                await bench.scan("GLASS-A")
                await bench.scan("TAG UNDO")
            if step != 7:
                await bench.scan(cup)
            if step == 3:
                await bench.scan("BADGE AB")
            if step == 5:
                await bench.scan("TAG STOP")
                await bench.scan("TAG NEXT PLY")
            await bench.scan("TAG LOG")
            assert bench.app.bench.desk.slip is None, (step, bench.said)
    laid = [entry.act for entry in entries(small_book)[before:] if entry.kind == "lay"]
    assert [act.step for act in laid] == [1, 2, 3, 4, 5, 6, 7]
    assert {act.piece for act in laid} == {"SKIN.UPR-L/1"}
    assert [act.lots[0].what for act in laid] == [cloth.get(step, "TWILL-A") for step in range(1, 8)]
    assert all(len(act.lots) == 1 for act in laid)
    assert laid[2].seen_by == "AB"


async def test_the_ply_slip_shows_the_stroke_as_the_person_sees_it(
    small_book: Path, open_bench: OpenBench, cup_of_600: str
) -> None:
    async with open_bench(small_book) as bench:
        for piece, side in (("SKIN.UPR-L", "LEFT"), ("SKIN.UPR-R", "RIGHT")):
            await bench.scan(piece)
            await bench.type("lay")
            for word in ("step", "2"):
                if word == "step":
                    bench.app.bench.desk.slip = bench.app.bench.desk.slip.moved_to(word)
                else:
                    await bench.type(word)
            assert side in bench.shown
            seen = bench.app.bench.desk.slip.ply.seen_deg
            assert f"ply 2 of 7   {seen:+.0f}  {'/' if seen > 0 else chr(92)}  as you see it" in bench.shown
            assert cup_of_600 in bench.shown
            await bench.type("throw away")
            await bench.key("escape")


async def test_one_cut_takes_many_pieces_one_kerf_and_one_offcut(
    small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book) as bench:
        await bench.scan("SHEET-A")
        await bench.type("cut")
        for code in ("RIB.01-L", "RIB.01-R", "FIT.MAIN-L"):
            await bench.scan(code)
        assert bench.app.bench.desk.slip.value("pieces").count(";") == 2
        bench.app.bench.desk.slip = bench.app.bench.desk.slip.moved_to("kerf")
        await bench.type("3")
        await bench.type("600 mm x 400 mm")
        await bench.type("log")
    act = last_entry(small_book).act
    assert act.pieces == ("RIB.01-L/1", "RIB.01-R/1", "FIT.MAIN-L/1")
    assert act.kerf_m == 0.003
    assert (act.offcut.length_m, act.offcut.width_m) == (0.6, 0.4)
    assert [minted.kind.value for minted in act.minted].count("offcut") == 1


# -- keys, large print, correction


async def test_a_held_enter_logs_once(small_book: Path, open_bench: OpenBench) -> None:
    before = len(entries(small_book))
    async with open_bench(small_book) as bench:
        for text in ("note", "radius looks right", "", ""):
            await bench.type(text)
        while bench.app.bench.desk.slip.current is not None:
            await bench.key("enter")
        for after in (500, *[33] * 40):
            await bench.pilot.press("enter")
            bench.clock.go_on(milliseconds=after)
        await bench.key("enter")
    assert len(entries(small_book)) == before + 1


async def test_a_held_enter_never_confirms_what_it_asked_for(small_book: Path, open_bench: OpenBench) -> None:
    before = len(entries(small_book))
    async with open_bench(small_book) as bench:
        await bench.type("undo")
        while bench.app.bench.desk.slip.current is not None:
            await bench.key("enter")
        bench.clock.go_on(seconds=1)
        await bench.pilot.press("enter")
        await bench.settle()
        assert "log once more to do it" in bench.said[-1]
        for after in (250, 33, 33, 200):
            bench.clock.go_on(milliseconds=after)
            await bench.pilot.press("enter")
            await bench.settle()
        assert len(entries(small_book)) == before
        await bench.key("enter")
        assert len(entries(small_book)) == before + 1


async def test_f9_corrects_the_last_entry_and_shows_its_effect_first(
    small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book) as bench:
        await bench.scan("RIB.01-L")
        await bench.type("313.4")
        await bench.key("f9")
        bench.app.bench.desk.slip = bench.app.bench.desk.slip.moved_to("reading")
        await bench.type("312.4")
        await bench.type("log")
        assert "log once more to do it" in bench.said[-1]
        assert last_entry(small_book).act.reading_kg == (0.3134,)
        await bench.type("log")
    weighed = [entry for entry in open_build(small_book).snapshot.logged if entry.kind == "weigh"]
    assert [getattr(entry.act, "reading_kg", None) for entry in weighed] == [(0.3124,)]


async def test_f8_prints_the_ply_and_its_cup_large(
    small_book: Path, open_bench: OpenBench, cup_of_600: str
) -> None:
    async with open_bench(small_book) as bench:
        await bench.scan("SKIN.UPR-L")
        await bench.type("lay")
        await bench.key("f8")
        lines = bench.app.bench.large_lines()
        assert lines == ("LEFT 1/7 0-", f"{cup_of_600} 14 min", "762 of 80 g")
        assert bench.app.screen.query_one("#large").display
        assert not bench.app.screen.query_one("#body").display
        assert "####" in bench.shown
        await bench.key("f8")
        assert bench.app.screen.query_one("#body").display


async def test_every_action_of_the_bench_is_in_the_list_with_its_tip(
    small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book, size=(120, 200)) as bench:
        await bench.type("actions")
        shown = " ".join(bench.shown.split())
        for action in bench.app.bench.table:
            assert action.word in shown
            assert " ".join(action.tip.split())[:40] in shown, action.word
        await bench.key("escape")
        assert bench.app.bench.is_current


async def test_plain_ascii_is_drawn_where_the_encoding_has_no_more(
    demo_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(demo_book, plain=True) as bench:
        assert bench.shown.isascii(), [c for c in bench.shown if not c.isascii()]
        assert "STOP" in bench.shown


async def test_words_in_brackets_are_shown_as_they_were_written(
    small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book) as bench:
        for text in ("note", "radius [/x] [bold]right", "", "", "", "log"):
            await bench.type(text)
        assert last_entry(small_book).act.text == "radius [/x] [bold]right"
        assert "radius [/x] [bold]right" in bench.shown
