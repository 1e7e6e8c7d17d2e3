"""Questions made up from the published description, good and bad: none may upset the service.

A description cannot say which alloys there are or that percents sum to 100; so a well-formed question may
be refused, and that one check is left out.
"""

import schemathesis
from hypothesis import HealthCheck, Phase, settings
from schemathesis.specs.openapi.checks import positive_data_acceptance

from service.app import create_app
from service.problems import MEDIA_TYPE
from service.settings import Settings

schema = schemathesis.openapi.from_asgi("/openapi.json", create_app(Settings(access_log=False)))


@schema.parametrize()
@settings(
    max_examples=40,
    derandomize=True,
    deadline=None,
    phases=[Phase.explicit, Phase.generate],
    suppress_health_check=list(HealthCheck),
)
def test_whatever_is_asked_is_answered_in_order(case):
    answer = case.call()
    assert answer.status_code < 500, answer.text
    assert "link" in answer.headers
    kind = answer.headers["content-type"][0]
    if answer.status_code >= 400:
        assert kind == MEDIA_TYPE
        problem = answer.json()
        assert problem["safety"]["notes"]
        if answer.status_code == 422:
            assert problem["errors"], problem
            assert all(error["field"] and error["detail"] for error in problem["errors"])
    elif kind == "application/json":
        assert answer.json()["safety"]["notes"]
    case.validate_response(answer, excluded_checks=[positive_data_acceptance])
