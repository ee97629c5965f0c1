"""Where the pages are served: the address is read, and taken, before anything starts."""

from __future__ import annotations

import socket

import pytest

from qa_tracker.ops.serving import Bind, listen, listened, other_port, read_bind, web_answers
from qa_tracker.ops.supervisor import Refused


@pytest.mark.parametrize(
    ("text", "bind"),
    [
        pytest.param("127.0.0.1:8000", Bind("127.0.0.1", 8000), id="number"),
        pytest.param("localhost:0", Bind("localhost", 0), id="name and any port"),
        pytest.param("[::1]:8000", Bind("::1", 8000), id="six"),
    ],
)
def test_bind_is_read_when_it_is_an_address(text: str, bind: Bind) -> None:
    assert read_bind(text) == bind


@pytest.mark.parametrize("text", ["8000", ":8000", "127.0.0.1", "127.0.0.1:web", "127.0.0.1:65536", ""])
def test_bind_is_refused_when_it_is_no_address(text: str) -> None:
    with pytest.raises(Refused, match="write HOST:PORT"):
        read_bind(text)


def test_port_is_refused_with_another_to_try_when_it_is_busy() -> None:
    with socket.create_server(("127.0.0.1", 0)) as other:
        port = other.getsockname()[1]

        with pytest.raises(Refused, match=rf"Port {port} .* in use .* --bind 127.0.0.1:{other_port(port)}"):
            listen(Bind("127.0.0.1", port))


def test_address_is_refused_when_it_is_not_this_computer() -> None:
    with pytest.raises(Refused, match="can't be used here"):
        listen(Bind("192.0.2.1", 8000))


def test_any_port_becomes_a_known_one_when_listening() -> None:
    with listen(Bind("127.0.0.1", 0)) as listener:
        assert listened(listener).port > 0


@pytest.mark.parametrize(
    ("bind", "words"),
    [
        pytest.param(Bind("0.0.0.0", 80), "127.0.0.1:80", id="everywhere"),
        pytest.param(Bind("::", 80), "[::1]:80", id="everywhere by six"),
    ],
)
def test_bind_is_written_as_reached_from_here_when_shown(bind: Bind, words: str) -> None:
    assert str(bind) == words


def test_web_does_not_answer_when_nothing_listens() -> None:
    with socket.create_server(("127.0.0.1", 0)) as listener:
        bind = listened(listener)

    assert not web_answers(bind, "127.0.0.1")
