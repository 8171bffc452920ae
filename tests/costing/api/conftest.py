"""The same district, people and client as in the tests of the other half of the API."""

from tests.structures.api.conftest import _apart, as_user, engineer, office, site  # noqa: F401 -- fixtures
