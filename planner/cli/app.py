"""Commands: parse, call, print, exit. Heavy imports stay inside the commands."""

from __future__ import annotations

import sys
from enum import StrEnum
from pathlib import Path
from typing import Annotated, Any

import typer

import planner
from planner.cli.screen import say

app = typer.Typer(
    name="whirlcard",
    no_args_is_help=True,
    rich_markup_mode=None,
    pretty_exceptions_enable=False,
    help="Plan and safety-check a whirl-stand run, and print its test card. A planning aid: it "
    "never clears anyone to run.",
    context_settings={"help_option_names": ["-h", "--help"]},
)


class Paper(StrEnum):
    """Page sizes."""

    a4 = "a4"
    letter = "letter"


PlanArgument = Annotated[
    Path, typer.Argument(help="Plan folder, its plan.toml, or a record (.json).", metavar="PLAN")
]
KeptOption = Annotated[
    Path | None,
    typer.Option("--kept", help="Folder of kept results [user's cache folder].", metavar="DIR"),
]
FreshOption = Annotated[bool, typer.Option("--fresh", help="Compute everything anew and keep it.")]


def main() -> None:
    """Run the command line; output that the terminal cannot show is escaped, never a crash."""
    for stream in (sys.stdout, sys.stderr):
        if stream is not None and hasattr(stream, "reconfigure"):
            stream.reconfigure(errors="backslashreplace")
    app()


def _show_version(value: bool) -> None:
    if value:
        say(f"whirlcard {planner.__version__}")
        raise typer.Exit


@app.callback()
def _common(
    version: Annotated[
        bool,
        typer.Option("--version", callback=_show_version, is_eager=True, help="Show the version."),
    ] = False,
) -> None:
    """Plan and safety-check a whirl-stand run, and print its test card."""


@app.command()
def start(
    folder: Annotated[Path, typer.Argument(help="New or empty folder.", metavar="DIR")],
) -> None:
    """Write a commented starter plan folder that runs as it is."""
    from planner.cli.sources import stop_on_fault
    from planner.files.start import write_starter

    with stop_on_fault():
        written = write_starter(folder)
    names = "\n".join(f"  {path.name}" for path in written)
    say(f"Wrote {len(written)} files to {folder}:\n{names}\nNext: whirlcard check {folder}")


@app.command()
def check(
    plan: PlanArgument,
    as_json: Annotated[
        bool, typer.Option("--json", help="Print the whole record as JSON instead.")
    ] = False,
    kept: KeptOption = None,
    fresh: FreshOption = False,
) -> None:
    """Predict, judge against the rule book, and print the findings."""
    from planner.cli.sources import Keeping, load_record
    from planner.cli.summary import summary
    from planner.record.layout import to_bytes

    record = load_record(plan, Keeping(kept, fresh))
    say(to_bytes(record, ascii_only=True).decode().rstrip() if as_json else summary(record))
    _finish(record)


@app.command()
def card(
    plan: PlanArgument,
    out: Annotated[
        Path | None, typer.Option("--out", "-o", help="PDF to write [CARD.pdf].")
    ] = None,
    paper: Annotated[Paper, typer.Option(help="Page size.")] = Paper.a4,
    kept: KeptOption = None,
    fresh: FreshOption = False,
) -> None:
    """Print the test card as PDF, with its JSON record beside it."""
    from planner.cli.screen import check_target
    from planner.cli.sources import Keeping, load_record, write
    from planner.cli.summary import headline
    from planner.paper.card import card_pdf
    from planner.record.layout import to_bytes

    if out is not None:
        check_target(out, (".pdf",))
    record = load_record(plan, Keeping(kept, fresh))
    target = out or Path(f"{safe_name(record)}.pdf")
    files = {target: card_pdf(record, paper.value)}
    beside = target.with_suffix(".json")
    if beside.resolve() != plan.resolve():
        files[beside] = to_bytes(record)
    for path in files:
        check_target(path, (".pdf", ".json"))
    for path, data in files.items():
        write(path, data)
        say(f"Wrote {path}")
    say(headline(record))
    _finish(record)


@app.command()
def fan(
    plan: PlanArgument,
    out: Annotated[
        Path | None, typer.Option("--out", "-o", help="File ending in .pdf, .svg or .csv.")
    ] = None,
    paper: Annotated[Paper, typer.Option(help="Page size of a PDF.")] = Paper.a4,
    kept: KeptOption = None,
    fresh: FreshOption = False,
) -> None:
    """Draw natural frequencies over rotor speed with harmonics and the run's speeds."""
    from planner.cli.screen import check_target
    from planner.cli.sources import Keeping, load_record, write
    from planner.paper.fan import fan_csv, fan_pdf, fan_svg

    if out is not None:
        check_target(out, (".pdf", ".svg", ".csv"))
    record = load_record(plan, Keeping(kept, fresh))
    target = out or Path(f"{safe_name(record)}-fan.pdf")
    kind = target.suffix.lower()
    if kind == ".pdf":
        data = fan_pdf(record, paper.value)
    else:
        data = (fan_svg(record) if kind == ".svg" else fan_csv(record)).encode()
    write(target, data)
    say(f"Wrote {target}")


@app.command()
def speeds(
    plan: Annotated[Path, typer.Argument(help="Plan folder or its plan.toml.", metavar="PLAN")],
    out: Annotated[
        Path | None, typer.Option("--out", "-o", help="Table to write as well, ending in .csv.")
    ] = None,
) -> None:
    """Find better speeds for each hold that is too near a resonance."""
    from planner.cli.screen import check_target
    from planner.cli.sources import write
    from planner.cli.speeds import advice_csv, advice_of, told
    from planner.judge.status import exit_status
    from planner.model.results import Verdict

    if out is not None:
        check_target(out, (".csv",))
    advice = advice_of(plan)
    if out is not None:
        write(out, advice_csv(advice).encode())
    say(told(advice) + (f"\n\nWrote {out}" if out is not None else ""))
    worst = Verdict.worst([Verdict.GO, *(one.verdict for one in advice)])
    raise typer.Exit(int(exit_status(worst)))


@app.command()
def wind(
    plan: PlanArgument,
    out: Annotated[
        Path | None, typer.Option("--out", "-o", help="File ending in .pdf or .csv.")
    ] = None,
    step: Annotated[
        str, typer.Option(help="Step of the mean wind, with its unit.", metavar="SPEED")
    ] = "1 m/s",
    paper: Annotated[Paper, typer.Option(help="Page size of a PDF.")] = Paper.a4,
    kept: KeptOption = None,
    fresh: FreshOption = False,
) -> None:
    """Find and draw the wind gate: the greatest wind for every start, stop and abort."""
    from planner.cli.screen import check_target
    from planner.cli.sources import Keeping, write
    from planner.cli.wind import record_with_gate, told
    from planner.judge.status import exit_status
    from planner.judge.wind_gate import gate_verdict
    from planner.paper.wind_page import wind_csv, wind_pdf

    if out is not None:
        check_target(out, (".pdf", ".csv"))
    record, gate = record_with_gate(plan, Keeping(kept, fresh), step)
    target = out or Path(f"{safe_name(record)}-wind.pdf")
    is_table = target.suffix.lower() == ".csv"
    write(target, wind_csv(record, gate).encode() if is_table else wind_pdf(record, gate, paper))
    say(f"{told(gate)}\n\nWrote {target}")
    raise typer.Exit(int(exit_status(gate_verdict(gate))))


@app.command()
def method(
    quantity: Annotated[
        str | None, typer.Argument(help="Id of a quantity; leave out for the list.")
    ] = None,
) -> None:
    """Show how a number is computed: method, validity, source and hand check."""
    from planner.cli.methods import describe, listing

    say(listing() if quantity is None else describe(quantity))


def safe_name(record: dict[str, Any]) -> str:
    """File name from the card number: letters, digits, dot, dash and underscore only."""
    name = "".join(c if c.isalnum() or c in "._-" else "-" for c in record["plan"]["card"])
    return name.strip(".") or "card"


def _finish(record: dict[str, Any]) -> None:
    from planner.judge.status import exit_status
    from planner.model.results import Verdict

    raise typer.Exit(int(exit_status(Verdict(record["verdict"]))))
