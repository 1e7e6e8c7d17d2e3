import pytest

from service.__main__ import main, read_settings
from service.settings import Settings, SettingsError, settings_from


def test_defaults_stay_on_this_machine():
    settings = settings_from({})
    assert (settings.host, settings.port) == ("127.0.0.1", 8000)
    settings.check_address()


def test_environment_is_read_and_overridden():
    environment = {
        "MELTBAND_PORT": "9000",
        "MELTBAND_DOCS": "no",
        "MELTBAND_ROOT_PATH": "/melt",
        "HOME": "/x",
    }
    settings = settings_from(environment, port=9001, host=None)
    assert settings == Settings(port=9001, docs=False, root_path="/melt")


@pytest.mark.parametrize(
    ("environment", "words"),
    [
        ({"MELTBAND_PROT": "1"}, "MELTBAND_PROT is no setting"),
        ({"MELTBAND_PORT": "-1"}, "whole number"),
        ({"MELTBAND_PORT": "70000"}, "65535"),
        ({"MELTBAND_DOCS": "perhaps"}, "write 1 or 0"),
        ({"MELTBAND_ROOT_PATH": "melt/"}, "write it like /meltband"),
        ({"MELTBAND_MAX_BODY_BYTES": "0"}, "1 or more"),
    ],
)
def test_what_cannot_be_used_is_refused_by_name(environment, words):
    with pytest.raises(SettingsError, match=words):
        settings_from(environment)


@pytest.mark.parametrize("host", ["0.0.0.0", "::", "192.0.2.7", "example.test"])
def test_other_machines_are_kept_out_unless_asked_for(host):
    with pytest.raises(SettingsError, match="--allow-remote"):
        Settings(host=host).check_address()
    Settings(host=host, allow_remote=True).check_address()


@pytest.mark.parametrize("host", ["127.0.0.1", "127.8.9.1", "::1", "[::1]", "localhost"])
def test_loopback_needs_no_leave(host):
    Settings(host=host).check_address()


def test_command_line_wins_over_the_environment(monkeypatch):
    monkeypatch.setenv("MELTBAND_PORT", "9000")
    assert read_settings(["--port", "9001"]).port == 9001
    assert read_settings([]).port == 9000


def test_refusal_to_start_is_said_on_stderr(capsys):
    assert main(["--host", "0.0.0.0"]) == 2
    assert "--allow-remote" in capsys.readouterr().err
