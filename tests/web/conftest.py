"""What the tests of pages share: an app on a data folder of its own, a client of it, and its records."""

from pathlib import Path

import pytest
from flask import Flask
from flask.testing import FlaskClient

from advisor.records.store import Store
from advisor.web.app import create_app
from advisor.web.desk import desk_of


@pytest.fixture
def app(tmp_path: Path) -> Flask:
    return create_app(data_dir=tmp_path, testing=True)


@pytest.fixture
def client(app: Flask) -> FlaskClient:
    return app.test_client()


@pytest.fixture
def store(app: Flask) -> Store:
    return desk_of(app).store
