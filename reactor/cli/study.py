"""The commands for studies, and what all of them share: sweep, rerun, merge."""

import sys
from pathlib import Path

import click

from reactor.cli.common import INTERRUPTED, OVERRIDE, PARTIAL, STRICT, VIOLATED, show
from reactor.errors import CaseError

JOBS = click.option(
    "--jobs", type=click.IntRange(1), help="Local worker processes; without it one a processor."
)
SCHEDULER = click.option(
    "--scheduler", metavar="ADDRESS", help="Send batches to a Dask scheduler, like tcp://host:8786."
)
OUT = click.option(
    "--out", metavar="FILE", help="The study file; without it CASE.COMMAND.study in this folder."
)
FRESH = click.option("--fresh", is_flag=True, help="Replace a study file that is there.")
BUDGET = click.option(
    "--budget", metavar="TIME", default="120 s", show_default=True, help="Time that one point may take."
)


def workers(*options):
    """Return a decorator that adds the options that every study has."""

    def add(command):
        for option in reversed((*options, OUT, FRESH, JOBS, SCHEDULER, BUDGET)):
            command = option(command)
        return command

    return add


def crew(jobs, scheduler, budget):
    """Return the `Crew` that the options ask for."""
    from reactor.study import Crew
    from reactor.units.kinds import TIME

    try:
        seconds = TIME.within(0.01, 1e6, "60 s").read(budget).si
    except ValueError as error:
        raise CaseError(f"--budget {error}") from None
    return Crew(jobs, scheduler, seconds)


def where(out, case, command):
    """Return the path of the study file."""
    return Path(out or f"{Path(case).stem}.{command}.study")


class Watched:
    """Announce a study, show its progress, and keep what is finished on Ctrl-C."""

    def __init__(self, words, path):
        from reactor.report.progress import Progress
        from reactor.study.run import Clock

        self.words, self.path, self.tally = words, path, None
        self.progress = Progress(sys.stderr, sys.stderr.isatty(), Clock())

    def announce(self, tally):
        """Say the size before anything runs."""
        from reactor.report.studies import announced

        self.tally = tally
        click.echo(announced(tally, self.words, self.path), err=True)

    def __call__(self, tally):
        """Show the progress."""
        self.tally = tally
        self.progress(tally)

    def __enter__(self):
        return self

    def __exit__(self, kind, error, trace):
        if self.tally is not None:
            self.progress.end(self.tally)
        if kind is KeyboardInterrupt:
            done = self.tally.skipped + self.tally.finished if self.tally else 0
            click.echo(
                f"reactor: interrupted; {done} finished points are kept in {self.path}; "
                "the same command goes on from there",
                err=True,
            )
            sys.exit(INTERRUPTED)


def drawn(draw, found, figure):
    """Draw a figure, or say why not."""
    try:
        draw(found.about[found.about["kind"]], found.about["title"], figure)
    except ImportError:
        raise CaseError(
            '--figure needs Matplotlib: python -m pip install "photochlorination-reactor[figures]"'
        ) from None
    except (OSError, ValueError) as error:
        raise CaseError(
            f"--figure {figure}: cannot be drawn ({error}); name a .png, .svg or .pdf file"
        ) from None


def saved(name, write):
    """Write a table to a file; - is standard output."""
    if name == "-":
        write(sys.stdout)
        return
    try:
        with open(name, "w", encoding="utf-8", newline="") as file:
            write(file)
    except OSError as error:
        raise CaseError(f"{name}: cannot be written ({error.strerror}); choose another place") from None


@click.command()
@click.argument("case")
@OVERRIDE
@STRICT
@click.option(
    "--vary",
    metavar="KEY=VALUES",
    multiple=True,
    help='Vary one entry: "feed.ratio=5,10,20", "lamp.power=0.5..5 kW, 10 log"; may be repeated.',
)
@click.option(
    "--zip", "zipped", is_flag=True, help="Go through the lists together, not through every combination."
)
@click.option("--sample", metavar="WAY N", help='Draw points over ranges: "latin 200" or "sobol 256".')
@click.option("--seed", default=1, show_default=True, help="Makes a sample repeatable.")
@click.option(
    "--scenarios", metavar="FILE", help='CSV of points: a column a key ("lamp.power [kW]"), a row a point.'
)
@click.option(
    "--part", metavar="I/N", help="Only share I of N, for an array job; join the files with reactor merge."
)
@click.option("--retry", is_flag=True, help="Try points again that failed.")
@click.option(
    "--assert",
    "claims",
    metavar="CLAIM",
    multiple=True,
    help='Exit 1 where a point breaks it: "chlorine_slip<2 %"; may be repeated.',
)
@click.option(
    "--fail-on", type=click.Choice(["fail", "caution"]), help="Exit 1 where a verdict is as bad as this."
)
@click.option(
    "--csv",
    "csv_file",
    metavar="FILE",
    help="Write the points as CSV, units in the header; - is standard output.",
)
@click.option("--dry-run", is_flag=True, help="Say the size and stop.")
@workers()
def sweep(
    case,
    overrides,
    strict,
    vary,
    zipped,
    sample,
    seed,
    scenarios,
    part,
    retry,
    claims,
    fail_on,
    csv_file,
    dry_run,
    out,
    fresh,
    jobs,
    scheduler,
    budget,
):
    """Rate a case at many points.

    CASE is varied into a study file; the same command goes on where it was.

    Exit codes: 0 done; 1 a claim or verdict breaks; 6 points failed or are missing; 130 interrupted.
    """
    from reactor import study
    from reactor.case import load
    from reactor.report import studies

    path = where(out, case, "sweep")
    claimed = [study.claim(text) for text in claims]
    loaded = load(case, overrides, strict)
    points = study.design(loaded, vary, zipped, sample, seed, scenarios)
    if dry_run:
        click.echo(f"{points.size} points ({points.words})")
        return
    with Watched(points.words, path) as watched:
        study.sweep_file(
            loaded, points, path, crew(jobs, scheduler, budget), part, fresh, retry, watched, watched.announce
        )
    finish(path, studies, claimed, fail_on, csv_file)


def finish(path, studies, claims, fail_on, csv_file):
    """Print what a study found, and leave with its exit code."""
    from reactor import study

    found = study.overview(path)
    if csv_file:
        export(path, found, csv_file)
    if csv_file != "-":
        show(studies.summary(found, path))
    verdict = study.check(path, claims, fail_on)
    if claims or fail_on:
        click.echo("\n" + studies.checked(verdict, claims, fail_on), nl=False, err=csv_file == "-")
    sys.exit(VIOLATED if not verdict.kept else PARTIAL if found.failed or found.missing else 0)


def export(path, found, name):
    """Write the points of a study file as CSV; - is standard output."""
    from reactor.report.export import study_csv
    from reactor.study.tables import stream

    columns = {"number": "", **{column: unit for column, unit, _ in found.columns}, "state": "", "reason": ""}
    rows = stream(path, list(columns))
    saved(name, lambda file: study_csv(columns, rows, file))


@click.command()
@click.argument("file")
@click.argument("number", type=int)
@BUDGET
def rerun(file, number, budget):
    """Make a stored point again.

    Says what differs in point NUMBER of a study FILE: case, data, program, results.

    Exit codes: 0 the same; 1 it differs.
    """
    from reactor import study
    from reactor.report.studies import differences

    again = study.rerun(file, number, crew(None, None, budget).budget)
    show(differences(again))
    sys.exit(0 if again.same else VIOLATED)


@click.command()
@click.argument("out")
@click.argument("parts", nargs=-1, required=True)
@click.option("--fresh", is_flag=True, help="Replace OUT.")
def merge(out, parts, fresh):
    """Join the parts of a study.

    PARTS are study files made with --part; OUT gets all of their points.

    Exit codes: 0 complete; 6 points failed or are missing.
    """
    from reactor import study

    tally = study.merge(out, parts, fresh)
    missing = tally.size - tally.finished
    click.echo(f"{out}: {tally.finished} of {tally.size} points, {tally.failed} failed, {missing} missing")
    sys.exit(PARTIAL if missing or tally.failed else 0)
