"""The book named in the environment in; its history and what is read out of it, kept by write and hour, out."""

from __future__ import annotations

import os
from datetime import UTC, date, datetime, timedelta

import streamlit as st

from dashboard.serve import BOOK_VARIABLE
from fleet.errors import BookError
from fleet.forecasts.next_session import RobotOutlook
from fleet.forecasts.past_months import MonthForecast
from fleet.pipeline import Question, ReadOut, look_back
from fleet.pipeline import read_out as run_chain
from fleet.records.history import History
from fleet.records.ledger import Session
from fleet.store.book import Book, open_book
from fleet.store.reading import read_history

_MONTHS = 6
_WORKING = "Reading the book and working out the odds."


def now() -> datetime:
    """This moment."""
    return datetime.now(UTC)


def book() -> Book:
    """The book that this dashboard shows.

    Raises
    ------
    BookError
        If none is named, or it cannot be opened.
    """
    where = os.environ.get(BOOK_VARIABLE)
    if not where:
        raise BookError("No book is named: start the dashboard with 'wearbook show --book PATH'.")
    return _opened(where)


@st.cache_resource(show_spinner=False)
def _opened(where: str) -> Book:
    return open_book(where)


def history() -> History:
    """Everything the book holds now."""
    held = book()
    return _history(held.where, held.write_number(), _hour())


def read_out(question: Question) -> ReadOut:
    """Everything that is said of the book now; worked out once for each write, question and hour."""
    held = book()
    found = _read_out(held.where, held.write_number(), question, _hour())
    _newest(held.where).append(found)
    del _newest(held.where)[:-1]
    return found


def newest_read_out() -> ReadOut:
    """The last one that was worked out, perhaps a few writes old: enough for an order, and there at once."""
    kept = _newest(book().where)
    return kept[-1] if kept else read_out(Question())


def past_months() -> tuple[MonthForecast, ...]:
    """Forecasts of the last full months, made with what was known at the start of each, beside what followed."""
    held = book()
    return _past_months(held.where, held.write_number(), _hour())


def month_starts(today: date, first: date, most: int) -> list[date]:
    """Starts of the last full months before today, at most so many, none before `first`, and the present one's."""
    starts = [today.replace(day=1)]
    while len(starts) <= most:
        before = (starts[0] - timedelta(days=1)).replace(day=1)
        if before < first:
            break
        starts.insert(0, before)
    return starts


def outlook_of(found: ReadOut, robot: str) -> RobotOutlook | None:
    """What is said of one robot; None if it is not in service."""
    return next((outlook for outlook in found.next_session.robots if outlook.robot == robot), None)


def _hour() -> str:
    """Ages by the calendar move on, so no answer is kept for longer than its hour."""
    return f"{now():%Y-%m-%dT%H}"


@st.cache_resource(show_spinner=False, max_entries=4)
def _history(where: str, write_number: int, hour: str) -> History:
    return read_history(book(), now())


@st.cache_resource(show_spinner=_WORKING, max_entries=6)
def _read_out(where: str, write_number: int, question: Question, hour: str) -> ReadOut:
    return run_chain(_history(where, write_number, hour), question)


@st.cache_resource(show_spinner=False)
def _newest(where: str) -> list[ReadOut]:
    return []


@st.cache_resource(show_spinner="Asking what was forecast at the start of each past month.", max_entries=2)
def _past_months(where: str, write_number: int, hour: str) -> tuple[MonthForecast, ...]:
    held, known = book(), _history(where, write_number, hour)
    ran = [session.happened_at for session in known.of(Session).values()]
    if not ran:
        return ()
    zone = known.zone
    starts = month_starts(now().astimezone(zone).date(), min(ran).astimezone(zone).date(), _MONTHS)
    moments = [datetime(start.year, start.month, 1, tzinfo=zone) for start in starts]
    if len(moments) < 2:
        return ()
    then = [read_history(held, moment, moment) for moment in moments[:-1]]
    return look_back(read_history(held, moments[-1]), then)
