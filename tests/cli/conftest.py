"""Commands under test keep their results in a folder of the tests' own."""

from __future__ import annotations

import pytest


@pytest.fixture(scope="session", autouse=True)
def _own_kept_folder(tmp_path_factory):
    with pytest.MonkeyPatch.context() as patch:
        patch.setenv("WHIRLCARD_KEPT", str(tmp_path_factory.mktemp("kept")))
        yield
