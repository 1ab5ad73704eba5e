"""A typed client in Python: made from the served contract without warnings, used against the service."""

import importlib
import os
import re
import subprocess
import sys
from pathlib import Path

import pytest

from forebay.api.examples import request_example
from forebay.api.media import JSON
from forebay.api.routers.registry import OPERATIONS

ANSWERED = {name: operation for name, operation in OPERATIONS.items() if JSON in operation.media_types}
"""Operations that answer with JSON; pictures are bytes in any client."""


def snake(name):
    """Name of a module or a function, as the generator writes it."""
    return re.sub(r"(?<!^)(?=[A-Z])", "_", name).lower()


@pytest.fixture(scope="module")
def client(contract, tmp_path_factory):
    """Name of the generated package, which can be imported; what the generator said stands in its log."""
    folder = tmp_path_factory.mktemp("python")
    search = os.pathsep.join([str(Path(sys.executable).parent), os.environ["PATH"]])
    command = [
        *(sys.executable, "-m", "openapi_python_client", "generate", "--meta", "none"),
        *("--path", str(contract), "--output-path", str(folder / "forebay_client")),
    ]
    outcome = subprocess.run(
        command, env={**os.environ, "PATH": search}, capture_output=True, text=True, check=False
    )
    assert outcome.returncode == 0, outcome.stdout + outcome.stderr
    sys.path.insert(0, str(folder))
    yield "forebay_client", outcome.stdout + outcome.stderr
    sys.path.remove(str(folder))


def generated(client, *parts):
    return importlib.import_module(".".join([client[0], *parts]))


def test_generator_understands_everything_but_pictures(client):
    unread = re.findall(r"^WARNING parsing (\S+ \S+) ", client[1], re.MULTILINE)
    pictures = {f"POST {o.path}" for name, o in OPERATIONS.items() if name not in ANSWERED}
    assert set(unread) <= pictures
    assert "Unable to process schema" not in client[1]


def call(client, service, operation, body):
    module = generated(client, "api", operation.tag, snake(operation.operation_id))
    with generated(client).Client(base_url=service.address, timeout=120.0) as connection:
        return module.sync_detailed(client=connection, body=body)


@pytest.mark.parametrize("operation", ANSWERED.values(), ids=ANSWERED)
def test_operation_can_be_called(client, service, operation):
    example = request_example(operation.operation_id)
    model = getattr(generated(client, "models"), operation.request.__name__, None)
    # a request with several ways of asking is a choice between classes, which the example is one of
    body = Body(example) if model is None else model.from_dict(example)
    answer = call(client, service, operation, body)
    assert answer.status_code == 200, answer.content[:2000]
    assert operation.result is not None
    assert type(answer.parsed).__name__ == f"{operation.result.__name__}Envelope"
    assert answer.parsed.provenance.service == "forebay"


class Body(dict):
    """A body that is written as it is."""

    def to_dict(self):
        return dict(self)


def test_request_is_written_as_it_was_read(client):
    models = generated(client, "models")
    for name, operation in ANSWERED.items():
        model = getattr(models, operation.request.__name__, None)
        if model is not None:
            example = request_example(name)
            assert example.items() <= model.from_dict(example).to_dict().items()


def test_refusal_is_a_problem(client, service):
    models = generated(client, "models")
    example = request_example("sampleField")
    body = models.SampleRequest.from_dict(example | {"layout": {"depth": 0.0}})
    answer = call(client, service, OPERATIONS["sampleField"], body)
    assert answer.status_code == 422
    assert isinstance(answer.parsed, models.Problem)
    assert [error.pointer for error in answer.parsed.errors] == ["#/layout/depth"]
