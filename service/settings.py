"""Settings of one running service: a frozen value, read once from the environment at the start."""

import ipaddress
from collections.abc import Mapping
from dataclasses import dataclass, fields, replace

PREFIX = "MELTBAND_"
_YES, _NO = ("1", "true", "yes", "on"), ("0", "false", "no", "off")


class SettingsError(ValueError):
    """A setting that cannot be used; the text says which and what would be right."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Settings:
    """Everything an operator may choose; each field is read from MELTBAND_<FIELD NAME>."""

    host: str = "127.0.0.1"
    port: int = 8000
    allow_remote: bool = False
    """Listen on an address other machines can reach; there is no log-in, so this is asked for by name."""
    root_path: str = ""
    """Path prefix a proxy serves this under, such as /meltband."""
    trusted_proxies: str = "127.0.0.1"
    """Comma-separated addresses whose X-Forwarded-* headers are believed."""
    max_body_bytes: int = 16 * 1024 * 1024
    max_recording_bytes: int = 256 * 1024 * 1024
    """Of a recorded run: 64 sensors of 200 000 samples with times of their own."""
    docs: bool = True
    """Serve the page at /docs and the OpenAPI document."""
    access_log: bool = True
    keep_alive_s: int = 5
    graceful_timeout_s: int = 20

    def __post_init__(self) -> None:
        """Refuse values that could not work."""
        if not 0 <= self.port <= 65535:
            raise SettingsError(f"port is {self.port}; it must be 0 (any free one) to 65535.")
        if self.root_path and (not self.root_path.startswith("/") or self.root_path.endswith("/")):
            raise SettingsError(f"root_path is {self.root_path!r}; write it like /meltband.")
        for name in ("max_body_bytes", "max_recording_bytes", "keep_alive_s", "graceful_timeout_s"):
            if getattr(self, name) < 1:
                raise SettingsError(f"{name} is {getattr(self, name)}; it must be 1 or more.")

    def check_address(self) -> None:
        """Raise SettingsError if the address is reachable from other machines and nobody asked for that."""
        if self.allow_remote or is_loopback(self.host):
            return
        raise SettingsError(
            f"{self.host} can be reached from other machines, and this service asks nobody for a password. "
            f"If that is meant, say so with --allow-remote or {PREFIX}ALLOW_REMOTE=1, and put a proxy with "
            "log-in and time-outs in front. Otherwise use 127.0.0.1."
        )


def is_loopback(host: str) -> bool:
    """Tell whether a host name or address stays on this machine."""
    if host == "localhost":
        return True
    try:
        return ipaddress.ip_address(host.strip("[]")).is_loopback
    except ValueError:
        return False


def settings_from(environment: Mapping[str, str], **overrides: object) -> Settings:
    """Read the settings from MELTBAND_* variables; overrides that are None are passed over.

    Raises SettingsError for an unknown variable or a value of the wrong kind.
    """
    defaults = Settings()
    known = {PREFIX + field.name.upper(): field.name for field in fields(Settings)}
    chosen: dict[str, object] = {}
    for variable in sorted(environment):
        if not variable.startswith(PREFIX):
            continue
        if variable not in known:
            raise SettingsError(f"{variable} is no setting here. Known: {', '.join(sorted(known))}.")
        name = known[variable]
        chosen[name] = _read(variable, environment[variable], getattr(defaults, name))
    chosen.update({name: value for name, value in overrides.items() if value is not None})
    return replace(defaults, **chosen)  # type: ignore[arg-type]  # the kinds were checked against the defaults


def _read(variable: str, text: str, default: object) -> object:
    text = text.strip()
    if isinstance(default, bool):
        if text.lower() not in _YES + _NO:
            raise SettingsError(f"{variable} is {text!r}; write 1 or 0.")
        return text.lower() in _YES
    if isinstance(default, int):
        if not text.isascii() or not text.isdigit():
            raise SettingsError(f"{variable} is {text!r}; write a whole number.")
        return int(text)
    return text
