from __future__ import annotations

import socket
import stat
from pathlib import Path

import pytest

from app import settings as settings_module
from app.settings import Settings, StartError, current, prepare_data_folder, read_settings, use


@pytest.fixture
def no_server(monkeypatch):
    monkeypatch.setattr(settings_module, "_in_use", None)


def test_without_options_it_opens_on_this_computer_at_8501():
    settings = read_settings([], {})
    assert (settings.host, settings.port, settings.public_address) == ("127.0.0.1", 8501, None)
    assert settings.address == "http://127.0.0.1:8501"


def test_the_option_wins_over_the_environment_and_that_over_the_user_folder(tmp_path):
    environment = {"HALFWIDTH_DATA": str(tmp_path / "named")}
    assert (
        read_settings(["--data", str(tmp_path / "given")], environment).data == tmp_path / "given"
    )
    assert read_settings([], environment).data == tmp_path / "named"
    assert "halfwidth" in read_settings([], {}).data.name.lower()


def test_a_relative_data_folder_is_made_absolute_where_it_was_typed(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    assert read_settings(["--data", "studies"], {}).data == tmp_path / "studies"


@pytest.mark.parametrize(
    ("typed", "host"),
    [
        ("127.0.0.1", "127.0.0.1"),
        ("127.8.9.10", "127.8.9.10"),
        ("localhost", "127.0.0.1"),
        ("LocalHost", "127.0.0.1"),
        ("::1", "::1"),
        ("[::1]", "::1"),
    ],
)
def test_loopback_is_taken(typed, host):
    assert read_settings(["--host", typed], {}).host == host


@pytest.mark.parametrize(
    "typed",
    ["0.0.0.0", "::", "192.168.1.7", "10.0.0.1", "example.org", "localhost.example.org", "",
     "127.1", "::1%eth0", "128.0.0.1", "2130706433"],
)  # fmt: skip
def test_any_other_host_is_refused_with_the_reason(typed):
    with pytest.raises(StartError) as refused:
        read_settings(["--host", typed], {})
    sentence = str(refused.value)
    assert "only on this computer" in sentence
    assert "sign-in and TLS are not part of this version" in sentence
    assert "\n" not in sentence


@pytest.mark.parametrize("typed", ["x", "-1", "65536", "80.5", "", " 80", "²", "１"])
def test_a_bad_port_is_refused_in_one_sentence(typed):
    with pytest.raises(StartError, match=r"whole number from 1 to 65535"):
        read_settings([f"--port={typed}"], {})


def test_an_unknown_option_is_refused_in_one_sentence():
    with pytest.raises(StartError, match=r"^Halfwidth cannot start: .*--bogus.*lists options\.$"):
        read_settings(["--bogus"], {})


@pytest.mark.parametrize(
    "text", ["survey.example.org", "ftp://example.org", "https://", "https://a/b"]
)
def test_a_public_address_must_be_a_web_address(text):
    with pytest.raises(StartError, match="HALFWIDTH_PUBLIC_ADDRESS"):
        read_settings([], {"HALFWIDTH_PUBLIC_ADDRESS": text})


def test_a_public_address_is_kept_as_an_origin():
    read = read_settings([], {"HALFWIDTH_PUBLIC_ADDRESS": "https://Survey.example.org:8443/"})
    assert read.public_address == "https://survey.example.org:8443"


def test_the_host_values_are_exact(tmp_path):
    usual = Settings("127.0.0.1", 8501, tmp_path)
    assert usual.host_values == {"127.0.0.1:8501", "localhost:8501", "[::1]:8501"}
    assert "127.0.0.7:9000" in Settings("127.0.0.7", 9000, tmp_path).host_values
    assert "localhost" in Settings("127.0.0.1", 80, tmp_path).host_values
    assert Settings("::1", 8501, tmp_path).address == "http://[::1]:8501"


def test_the_data_folder_is_made_for_this_user_alone(tmp_path):
    folder = tmp_path / "new" / "data"
    prepare_data_folder(folder)
    assert stat.S_IMODE(folder.stat().st_mode) == 0o700
    assert list(folder.iterdir()) == []


def test_a_folder_that_cannot_be_written_to_is_named(tmp_path):
    file = tmp_path / "file"
    file.write_text("in the way")
    with pytest.raises(StartError) as refused:
        prepare_data_folder(file / "data")
    assert str(file / "data") in str(refused.value)
    assert "--data" in str(refused.value)


@pytest.mark.usefixtures("no_server")
def test_a_screen_without_a_server_reads_the_environment_each_time(monkeypatch, tmp_path):
    for name in ("one", "two"):
        monkeypatch.setenv("HALFWIDTH_DATA", str(tmp_path / name))
        assert current().data == tmp_path / name


@pytest.mark.usefixtures("no_server")
def test_the_settings_of_the_server_win(monkeypatch, tmp_path):
    monkeypatch.setenv("HALFWIDTH_DATA", str(tmp_path / "environment"))
    started = Settings("127.0.0.1", 8600, tmp_path / "option")
    use(started)
    assert current() is started


def test_a_taken_port_is_refused_in_one_sentence():
    from app.serving import listening_socket

    with socket.create_server(("127.0.0.1", 0)) as taken:
        port = taken.getsockname()[1]
        with pytest.raises(StartError, match=rf"port {port} is already in use"):
            listening_socket("127.0.0.1", port)


def test_settings_cannot_be_changed_afterwards():
    with pytest.raises(AttributeError):
        read_settings([], {}).data = Path("/elsewhere")
