from diagrams.errors import DataFault
from service import __version__
from service.app import create_app
from service.settings import Settings
from tests.conftest import asker


def test_alive_and_ready(ask):
    assert ask("GET", "/livez").json()["status"] == "alive"
    assert ask("GET", "/readyz").json()["status"] == "ready"


def test_version_names_code_and_data(ask):
    version = ask("GET", "/version").json()
    assert (version["name"], version["version"]) == ("meltband", __version__)
    assert set(version["editions"]) == {"diagrams", "fillers", "safety"}
    assert all(version["editions"].values())


def test_faulty_data_keep_it_alive_but_not_ready():
    def faulty():
        raise DataFault("regions of pb-sn overlap")

    ask = asker(create_app(Settings(), readiness=faulty))
    assert ask("GET", "/livez").status_code == 200
    answer = ask("GET", "/readyz")
    assert answer.status_code == 503
    assert answer.headers["retry-after"] == "30"
    assert answer.json()["code"] == "not-ready"
    assert "pb-sn overlap" in answer.json()["detail"]
    assert answer.json()["safety"]["notes"]
