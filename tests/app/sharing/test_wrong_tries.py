from __future__ import annotations

import threading

import pytest

from app.sharing.wrong_tries import WrongTries, address_key, link_key


class Clock:
    def __init__(self):
        self.now = 1000.0

    def __call__(self):
        return self.now


@pytest.fixture
def clock():
    return Clock()


def test_ten_wrong_tries_a_minute_are_free_and_the_next_one_waits(clock):
    tries = WrongTries(clock=clock)
    assert [tries.count("office") for _ in range(10)] == [0] * 10
    clock.now += 15
    assert tries.count("office") == 45


def test_waiting_is_over_after_a_minute_and_refused_tries_do_not_lengthen_it(clock):
    tries = WrongTries(limit=2, clock=clock)
    tries.count("office")
    clock.now += 20
    tries.count("office")
    for _ in range(50):
        assert tries.count("office") == 40
    clock.now += 39.5
    assert tries.count("office") == 1
    clock.now += 0.5
    assert tries.count("office") == 0
    assert tries.count("office") == 20, "the second try is still remembered"


def test_slow_tries_never_wait(clock):
    tries = WrongTries(limit=10, clock=clock)
    for _ in range(200):
        assert tries.count("office") == 0
        clock.now += 6.001


def test_addresses_do_not_share_their_count(clock):
    tries = WrongTries(limit=1, clock=clock)
    assert tries.count("one") == 0
    assert tries.count("two") == 0
    assert tries.count("one") == 60


def test_a_link_tried_from_many_addresses_waits_too_and_the_addresses_are_not_charged(clock):
    tries = WrongTries(limit=3, clock=clock)
    for number in range(3):
        assert tries.count(f"address {number}", "link") == 0
    assert tries.count("address 9", "link") == 60
    assert [tries.count("address 9") for _ in range(3)] == [0, 0, 0]


def test_the_table_is_bounded_and_the_least_recent_makes_room(clock):
    tries = WrongTries(limit=1, capacity=100, clock=clock)
    for number in range(1000):
        tries.count(str(number))
    assert len(tries) == 100
    assert tries.count("999") > 0
    assert tries.count("0") == 0


def test_many_threads_at_once_get_exactly_the_free_tries(clock):
    tries = WrongTries(limit=10, clock=clock)
    answers = []
    threads = [
        threading.Thread(target=lambda: answers.extend(tries.count("x") for _ in range(50)))
        for _ in range(8)
    ]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert answers.count(0) == 10


def test_keys_of_addresses():
    assert address_key("192.0.2.1") != address_key("192.0.2.2")
    assert address_key("2001:db8::1") == address_key("2001:db8:0:0:ffff::2")
    assert address_key("2001:db8::1") != address_key("2001:db8:0:1::1")
    assert address_key(None) == address_key("") == address_key("testclient")
    assert link_key("x") != address_key("x")
