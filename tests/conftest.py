"""Fixtures of more than one file of tests."""

import signal
from collections.abc import Iterator

import pytest


@pytest.fixture
def ordinary_interrupts() -> Iterator[None]:
    """Ctrl-C as in a terminal, even where the tests run in the background."""
    former = signal.signal(signal.SIGINT, signal.default_int_handler)
    yield
    signal.signal(signal.SIGINT, former)
