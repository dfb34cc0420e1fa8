"""Wrong tries at links, counted and slowed; right ones are never asked about."""

from __future__ import annotations

import ipaddress
import math
import threading
import time
from collections import OrderedDict, deque
from collections.abc import Callable


class WrongTries:
    """Bounded table in memory of recent wrong tries, by address and by link.

    Only somebody who tried wrongly asks this table, so an office behind one address keeps
    opening its right links while a neighbour guesses.

    Parameters
    ----------
    limit : int
        Wrong tries of one key within the window before the next one has to wait.
    window : float
        Seconds a wrong try is remembered.
    capacity : int
        Keys remembered at once; the one tried least recently makes room.
    clock : callable
        Seconds that only grow.
    """

    def __init__(
        self,
        *,
        limit: int = 10,
        window: float = 60.0,
        capacity: int = 4096,
        clock: Callable[[], float] = time.monotonic,
    ) -> None:
        self._limit = limit
        self._window = window
        self._capacity = capacity
        self._clock = clock
        self._tries: OrderedDict[str, deque[float]] = OrderedDict()
        self._lock = threading.Lock()

    def __len__(self) -> int:
        return len(self._tries)

    def count(self, *keys: str) -> int:
        """Count one wrong try for every key, unless one of them has to wait.

        Parameters
        ----------
        *keys : str
            Whom the try belongs to, see ``address_key`` and ``link_key``.

        Returns
        -------
        int
            0 if it was counted, otherwise whole seconds to wait; a try refused in this way
            does not make the wait longer.
        """
        with self._lock:
            now = self._clock()
            wait = max((self._wait(key, now) for key in keys), default=0.0)
            if wait > 0:
                return math.ceil(wait)
            for key in keys:
                self._remember(key, now)
            return 0

    def _wait(self, key: str, now: float) -> float:
        times = self._tries.get(key)
        if times is None or len(times) < self._limit:
            return 0.0
        return times[0] + self._window - now

    def _remember(self, key: str, now: float) -> None:
        times = self._tries.setdefault(key, deque(maxlen=self._limit))
        times.append(now)
        self._tries.move_to_end(key)
        while len(self._tries) > self._capacity:
            self._tries.popitem(last=False)


def address_key(host: str | None) -> str:
    """Give the key of an address.

    Parameters
    ----------
    host : str or None
        Address of the client; None where the server does not know it.

    Returns
    -------
    str
        One key for an IPv4 address, one for the /64 network of an IPv6 address, because one
        household commands all of it (common practice, no single source).
    """
    try:
        address = ipaddress.ip_address(host or "")
    except ValueError:
        return "address unknown"
    if address.version == 6:
        return f"address {ipaddress.ip_network((address, 64), strict=False)}"
    return f"address {address}"


def link_key(token_hash: str) -> str:
    """Give the key of a link.

    Parameters
    ----------
    token_hash : str
        Hash of its token; the token itself is kept nowhere.

    Returns
    -------
    str
        The key.
    """
    return f"link {token_hash}"
