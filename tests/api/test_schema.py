"""schemathesis against the live server's own OpenAPI: no 5xx, every answer as its schema says."""

from __future__ import annotations

from typing import Any

import schemathesis
from hypothesis import HealthCheck, given, settings
from schemathesis.core.result import Ok
from schemathesis.specs.openapi.checks import positive_data_acceptance

from tests.conftest import LiveServer


def test_api_answers_as_documented(live: LiveServer) -> None:
    found = schemathesis.openapi.from_url(f"{live.url}/openapi.json").get_all_operations()
    operations = [result.ok() for result in found if isinstance(result, Ok)]
    assert operations
    for operation in operations:

        @settings(max_examples=60, suppress_health_check=list(HealthCheck))
        @given(case=operation.as_strategy())
        def answers(case: Any) -> None:
            # A schema cannot say that events are at most their total, so valid data may be refused.
            case.call_and_validate(excluded_checks=[positive_data_acceptance])

        answers()
