"""`fuel`: what the tanks hold, what stays trapped and behind what, at each attitude."""

from __future__ import annotations

import math
from pathlib import Path

import click

from ledger.cli.options import book_argument, json_option
from ledger.cli.progress import watched
from ledger.cli.say import print_findings, print_json, print_lines
from ledger.errors import Finding, Refused, Severity, Where
from ledger.model.attitude import Attitude, NotUpward
from ledger.units import Dimension, UnitError, read_quantity

ASKED = "asked"


@click.command("fuel")
@book_argument
@click.option(
    "--attitude", "attitudes", metavar="NAME", multiple=True, help="Only this one; repeat for more."
)
@click.option("--pitch", type=float, metavar="DEGREES", help="One more attitude, nose up positive.")
@click.option("--roll", type=float, metavar="DEGREES", help="Its roll, right wing down positive.")
@click.option(
    "--levels",
    type=click.IntRange(1, 10_000),
    default=100,
    show_default=True,
    help="Steps of the tables of --json; text shows about ten rows at most.",
)
@click.option("--temperature", metavar="TEXT", help="Of the fuel, for its density, for example '28 C'.")
@json_option
def fuel_command(
    *,
    book: Path,
    attitudes: tuple[str, ...],
    pitch: float | None,
    roll: float | None,
    levels: int,
    temperature: str | None,
    as_json: bool,
) -> None:
    """Print capacity, usable and trapped fuel of every tank.

    --pitch and --roll add one attitude named `asked`, which never enters usable.
    """
    from ledger.operations.reckon_fuel import reckon_fuel

    temperature_k = _temperature(temperature)
    asked = _asked(pitch, roll)
    with watched() as progress:
        fuel = reckon_fuel(
            book,
            attitudes=attitudes,
            asked=asked,
            levels=levels,
            temperature_k=temperature_k,
            progress=progress,
        )
    if as_json:
        from ledger.reports.figures import fuel_figures

        print_json(fuel_figures(fuel.report))
    else:
        from ledger.reports.fuel_lines import density_line, fuel_lines

        density = None
        if temperature_k is not None:
            density = density_line(fuel.density_kg_m3, temperature_k, fuel.display)
        chosen = bool(attitudes) or pitch is not None or roll is not None
        print_lines(fuel_lines(fuel.report, fuel.display, tables=chosen, density=density))
    print_findings(fuel.findings)


def _asked(pitch: float | None, roll: float | None) -> Attitude | None:
    if pitch is None and roll is None:
        return None
    for option, angle in (("--pitch", pitch), ("--roll", roll)):
        if angle is not None and not math.isfinite(angle):
            raise click.UsageError(f"{option} {angle} is not a finite angle; write degrees")
    asked = Attitude(name=ASKED, pitch_deg=pitch or 0.0, roll_deg=roll or 0.0, flight=False)
    try:
        _ = asked.up
    except NotUpward as error:
        raise Refused(
            Finding(
                code="attitude-not-upward",
                severity=Severity.STOP,
                where=Where(thing=ASKED),
                what=str(error),
                do="ask for a pitch and a roll in which the aircraft stands on its lower side",
            )
        ) from None
    return asked


def _temperature(text: str | None) -> float | None:
    if text is None:
        return None
    try:
        return read_quantity(text, Dimension.TEMPERATURE)
    except UnitError as error:
        raise click.UsageError(f"--temperature: {error}") from None
