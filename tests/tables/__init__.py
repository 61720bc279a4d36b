import pytest

pytest.register_assert_rewrite("tests.tables.comparing")
