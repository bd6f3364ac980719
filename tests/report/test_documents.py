"""Documents for `--json`: the keys that each command's help names, plain numbers only, and the tables' own figures."""

from __future__ import annotations

import json
import re
from collections.abc import Callable, Iterator
from typing import Any

import click
import pytest

from fleet.cli.read_outs import ages_command, lives_command, odds_command, plates_command, spares_command
from fleet.cli.tables import fit_command
from fleet.fits.table_fit import BeliefAsked, fit_table
from fleet.lives.ages import ages_of
from fleet.lives.life_data import LifeData
from fleet.pipeline import Question, ReadOut, read_out
from fleet.records.history import history_of
from fleet.records.ledger import Fitment
from fleet.report.documents import (
    ages_document,
    lives_document,
    odds_document,
    plates_document,
    spares_document,
)
from fleet.report.fit_report import fit_document
from tests.books import day, failure, history_with, session
from tests.demo_book import AS_OF

INF = float("inf")
DATA = LifeData([80, 110, 130, 150, 90], [80, 110, 130, INF, INF])
READ_OUTS: dict[click.Command, Callable[[ReadOut], dict[str, Any]]] = {
    odds_command: odds_document,
    spares_command: spares_document,
    plates_command: plates_document,
    lives_command: lives_document,
    ages_command: lambda found: ages_document(found.history, found.ages),
}


def keys_in(value: Any) -> set[str]:
    """Every key at any depth."""
    if isinstance(value, dict):
        return set(value).union(*map(keys_in, value.values()))
    if isinstance(value, list):
        return set().union(*map(keys_in, value))
    return set()


def promised(command: click.Command) -> set[str]:
    """The keys that a command's help names behind "JSON:"; remarks in round brackets and prose are no keys."""
    assert command.help is not None
    text = re.sub(r"\([^)]*\)", "", command.help.split("JSON:")[1])
    text = re.sub(r"with --t10 and --factor also|in words", "", text)
    return set(re.findall(r"[a-z][a-z0-9_]*", text)) - {"and"}


def numbers_in(value: Any) -> Iterator[float]:
    if isinstance(value, dict):
        value = list(value.values())
    if isinstance(value, list):
        for entry in value:
            yield from numbers_in(entry)
    elif isinstance(value, float):
        yield value


@pytest.mark.parametrize("command", list(READ_OUTS), ids=lambda command: command.name)
def test_a_document_holds_every_key_that_its_help_names(demo_read_out: ReadOut, command: click.Command) -> None:
    document = READ_OUTS[command](demo_read_out)
    assert promised(command) <= keys_in(document)
    assert len(promised(command)) >= 5


def test_the_document_of_a_table_holds_every_key_that_its_help_names() -> None:
    with_belief = fit_document(DATA, fit_table(DATA, 0.95, BeliefAsked(100.0, 3.0, 2.0, 2.0)))
    assert promised(fit_command) <= keys_in(with_belief)
    assert "posterior" not in fit_document(DATA, fit_table(DATA, 0.95, None))


def test_a_key_that_is_missing_would_be_found() -> None:
    assert {"robot", "hours", "held", "finishes", "mean", "low", "high", "joints", "word", "records"} <= promised(
        odds_command
    )
    assert not promised(odds_command) <= keys_in({"fleet": {}, "robots": []})


@pytest.mark.parametrize("command", list(READ_OUTS), ids=lambda command: command.name)
def test_a_document_is_plain_json_with_its_moment_and_caution(demo_read_out: ReadOut, command: click.Command) -> None:
    document = READ_OUTS[command](demo_read_out)
    assert json.loads(json.dumps(document, allow_nan=False)) == document
    assert document["as_of"] == AS_OF.isoformat()
    assert document["write_number"] == 1
    assert document["caution"]


@pytest.mark.parametrize("command", list(READ_OUTS), ids=lambda command: command.name)
def test_an_empty_book_and_one_without_failures_have_documents_too(command: click.Command) -> None:
    ran = [session(robot, day(n), 3.0) for n in range(1, 9) for robot in ("R1", "R2")]
    for history in (history_of((), AS_OF), history_with(*ran)):
        document = READ_OUTS[command](read_out(history, Question()))
        assert json.loads(json.dumps(document, allow_nan=False)) == document


def test_chances_lie_within_their_range_and_within_0_and_1(demo_read_out: ReadOut) -> None:
    document = odds_document(demo_read_out)
    chances = [document["fleet"]["finishes"], *(robot["finishes"] for robot in document["robots"])]
    chances += [joint["stops"] for robot in document["robots"] for joint in robot["joints"]]
    seen = [chance for chance in chances if chance is not None]
    assert len(seen) > 150
    for chance in seen:
        assert 0 <= chance["low"] <= chance["high"] <= 1
        assert 0 <= chance["mean"] <= 1


def test_a_held_robot_says_why_and_has_no_odds(demo_read_out: ReadOut) -> None:
    robots = {robot["robot"]: robot for robot in odds_document(demo_read_out)["robots"]}
    assert robots["W3"]["held"] == "battery tray cracked, waiting for a new one"
    assert robots["W3"]["finishes"] is None
    assert robots["W1"]["held"] is None and robots["W1"]["finishes"]["mean"] > 0


def test_every_figure_leads_to_records_of_the_book(demo_read_out: ReadOut) -> None:
    known = demo_read_out.history.of(Fitment)
    for robot in odds_document(demo_read_out)["robots"]:
        for joint in robot["joints"]:
            for part in joint["parts"]:
                assert part["records"] and all(record in known for record in part["records"])


def test_spares_of_the_document_are_those_of_the_read_out(demo_read_out: ReadOut) -> None:
    document = spares_document(demo_read_out)
    assert document["target"] == 0.9
    told = {part["part_type"]: (part["needed"], part["short"], part["on_hand"]) for part in document["parts"]}
    assert told == {need.code: (need.needed, need.short, need.on_hand) for need in demo_read_out.spares}


def test_an_age_without_end_is_null_not_infinity(demo_read_out: ReadOut) -> None:
    verdicts = {
        entry["replacement"]["verdict"]: entry["replacement"]["age_hours"]
        for entry in lives_document(demo_read_out)["lives"]
        if entry["replacement"] is not None
    }
    assert verdicts["do not replace by age"] is None
    assert verdicts["replace at age"] > 0


def test_ages_are_of_the_robot_and_part_that_were_asked_for(demo_read_out: ReadOut) -> None:
    document = ages_document(demo_read_out.history, demo_read_out.ages, robot="P1", part="belt")
    assert {(part["robot"], part["part_type"]) for part in document["parts"]} == {("P1", "belt")}
    assert len(document["parts"]) == 5
    whole = ages_document(demo_read_out.history, demo_read_out.ages)["parts"]
    assert sum(part["count"] for part in whole) == sum(s.count for s in demo_read_out.ages.spans if s.running)


def test_a_module_on_the_shelf_has_no_robot() -> None:
    history = history_with()
    parts = ages_document(history, ages_of(history))["parts"]
    assert {part["robot"] for part in parts if part["module"] == "U4"} == {None}
    broken = history_with(failure("U1 disc", "disc: split", day(3)))
    left = ages_document(broken, ages_of(broken), robot="R1", part="disc")["parts"]
    assert {part["joint"] for part in left} == {"knee"}, "a failed part no longer ages"


@pytest.mark.parametrize(
    "data",
    [
        LifeData([100] * 8, [INF] * 8),
        LifeData([50], [50]),
        LifeData([50, 50], [50, 50]),
        LifeData([1e-300, 1e300], [1e-300, 1e300]),
        LifeData([0, 50, 80], [60, 100, INF]),
        LifeData([5, 6], [5, INF]),
    ],
    ids=["no failures", "one failure", "one age", "wild", "intervals", "one failure and one good"],
)
def test_a_table_that_allows_little_is_still_plain_json(data: LifeData) -> None:
    document = fit_document(data, fit_table(data, 0.95, BeliefAsked(100.0, 3.0, 2.0, 2.0)))
    assert json.loads(json.dumps(document, allow_nan=False))["parts"] == data.n
    assert document["sentence"]
    if data.failures == 0:
        assert (document["shape"], document["bounds"]) == (None, None)
        assert document["posterior"]["mostly_assumption"]
    assert all(abs(number) < INF for number in numbers_in(document))
