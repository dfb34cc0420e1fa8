from __future__ import annotations

import asyncio
import gc
import socket

import pytest

from app.serving import listening_socket, warm_up
from app.settings import StartError


def test_accepted_connections_send_small_frames_at_once():
    async def no_delay() -> int:
        found = asyncio.get_running_loop().create_future()

        def accepted(_reader, writer):
            sock = writer.get_extra_info("socket")
            found.set_result(sock.getsockopt(socket.IPPROTO_TCP, socket.TCP_NODELAY))
            writer.close()

        listener = listening_socket("127.0.0.1", 0)
        async with await asyncio.start_server(accepted, sock=listener):
            _, writer = await asyncio.open_connection(*listener.getsockname())
            answer = await asyncio.wait_for(found, 5)
            writer.close()
            await writer.wait_closed()
        return answer

    assert asyncio.run(no_delay()) != 0


def test_the_port_belongs_to_the_first_who_takes_it():
    with listening_socket("127.0.0.1", 0) as first:
        port = first.getsockname()[1]
        with pytest.raises(StartError, match=f"port {port} is already in use"):
            listening_socket("127.0.0.1", port)


def test_an_address_this_computer_lacks_is_named():
    with pytest.raises(StartError, match=r"no address 203\.0\.113\.9"):  # kept for documentation
        listening_socket("203.0.113.9", 0)


def test_what_the_heavy_modules_made_is_out_of_the_collectors_reach():
    try:
        warm_up()
        assert gc.get_freeze_count() > 100_000
    finally:
        gc.unfreeze()
