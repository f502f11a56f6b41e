"""The service on the released rule sets, and one valid question for every check."""
import copy

import pytest
from precontact_rules import released


@pytest.fixture(scope="session")
def latest():
    """The rule set that answers where none is named."""
    return released.latest()


@pytest.fixture
def cases(latest):
    """{check: [case, ...]}, copies that a test may change."""
    by_check = {name: [] for name in latest.check_names}
    for case in latest.data["cases"]:
        by_check[case["check"]].append(copy.deepcopy(case))
    return by_check


@pytest.fixture
def question():
    """A valid question to the loading-error check, as (path, body)."""
    return "/v1/checks/loading-error", {"circuit": "thevenin", "source": {"voltage_volt": 12, "resistance_ohm": 1000}, "instrument": "multimeter-dc-volts"}
