"""The example requests: committed for readers, accepted by their schemas, answered as the document says."""

import json

import jsonschema  # type: ignore[import-untyped]
import pytest

from forebay.api.examples import example_layout, file_name, request_example
from forebay.api.media import JSON
from forebay.api.routers.registry import OPERATIONS
from forebay.app import create_app
from forebay.settings import Settings
from support.tree import ROOT

EXAMPLES = ROOT / "openapi" / "examples"
DOCUMENT = create_app(Settings(workers=1)).openapi()


def committed(name):
    return json.loads((EXAMPLES / name).read_text(encoding="utf-8"))


def validator(reference):
    return jsonschema.Draft202012Validator({"$ref": reference, "components": DOCUMENT["components"]})


@pytest.mark.parametrize("operation", OPERATIONS.values(), ids=OPERATIONS)
def test_committed_example_is_the_one_of_the_document(operation):
    content = DOCUMENT["paths"][operation.path]["post"]["requestBody"]["content"][JSON]
    assert (
        content["example"] == request_example(operation.operation_id) == committed(file_name(operation.path))
    )


def test_committed_layout_is_the_demonstration():
    assert committed("layout.json") == example_layout()


def test_nothing_else_is_committed_beside_them():
    expected = {file_name(operation.path) for operation in OPERATIONS.values()}
    expected |= {"layout.json", "layout-river-bend.json"}
    assert {path.name for path in EXAMPLES.iterdir()} == expected


@pytest.mark.parametrize("operation", OPERATIONS.values(), ids=OPERATIONS)
def test_example_fits_the_document(operation):
    schema = DOCUMENT["paths"][operation.path]["post"]["requestBody"]["content"][JSON]["schema"]
    validator(schema["$ref"]).validate(request_example(operation.operation_id))
    operation.request.model_validate(request_example(operation.operation_id))


@pytest.mark.parametrize(
    "operation", [o for o in OPERATIONS.values() if o.result], ids=lambda o: o.operation_id
)
def test_answer_fits_the_document(answer_to_example, operation):
    answer = answer_to_example(operation.operation_id, "si")
    responses = DOCUMENT["paths"][operation.path]["post"]["responses"]
    validator(responses["200"]["content"][JSON]["schema"]["$ref"]).validate(answer.json())


@pytest.mark.parametrize("path", ["/v1/limits", "/v1/criteria", "/v1/warnings", "/v1/water?temperature=12"])
def test_catalogue_fits_the_document(ready_client, path):
    schema = DOCUMENT["paths"][path.split("?")[0]]["get"]["responses"]["200"]["content"][JSON]["schema"]
    validator(schema["$ref"]).validate(ready_client.get(path).json())


def test_problem_fits_the_document(ready_client):
    problem = ready_client.post("/v1/field/sample", json={"layout": {"depth": 0}}).json()
    validator("#/components/schemas/Problem").validate(problem)
