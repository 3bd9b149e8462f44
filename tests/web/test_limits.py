"""Guessing passwords is slowed down; nobody is locked out."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from app.web.limits import FREE_TRIES, LONGEST_S, Attempts, TooMany
from tests.web.conftest import PASSWORD, Browser
from tests.web.test_errors_and_headers import assert_canonical


class Clock:
    """A clock that stands until it is moved."""

    now = 1000.0

    def __call__(self) -> float:
        """Return the moment."""
        return self.now


def fail(attempts: Attempts, times: int, account: str = "a", source: str = "s") -> None:
    for _ in range(times):
        attempts.failed(account, source)


def test_waits_grow_to_a_bound_and_end() -> None:
    clock = Clock()
    attempts = Attempts(clock)
    fail(attempts, FREE_TRIES["account"] - 1)
    attempts.check("a", "s")
    fail(attempts, 1)
    with pytest.raises(TooMany) as first:
        attempts.check("a", "s")
    fail(attempts, 12)
    with pytest.raises(TooMany) as later:
        attempts.check("a", "s")
    assert first.value.retry_after < later.value.retry_after <= LONGEST_S
    clock.now += LONGEST_S
    attempts.check("a", "s")


def test_a_right_password_forgets_the_accounts_failures_and_others_are_not_touched() -> None:
    attempts = Attempts(Clock())
    fail(attempts, FREE_TRIES["account"])
    attempts.check("b", "s")
    attempts.passed("a")
    attempts.check("a", "s")


def test_one_source_that_tries_many_names_waits_as_well() -> None:
    attempts = Attempts(Clock())
    for i in range(FREE_TRIES["source"]):
        attempts.failed(f"name{i}", "s")
    with pytest.raises(TooMany):
        attempts.check("another", "s")
    attempts.check("another", "elsewhere")


def test_the_sign_in_says_when_to_try_again(
    browser: Browser, person: str, another: Callable[[], Browser]
) -> None:
    for _ in range(FREE_TRIES["account"]):
        wrong = browser.ask("POST", "/api/session", {"sign_in": "maren", "password": "wrong"})
        assert_canonical(wrong, 422)
    answer = browser.ask("POST", "/api/session", {"sign_in": " Maren", "password": PASSWORD})
    assert_canonical(answer, 429, "too_many_tries")
    assert int(answer.headers["Retry-After"]) >= 1
    assert another().get("/api/state").status_code == 200
