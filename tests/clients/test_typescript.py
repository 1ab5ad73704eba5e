"""A typed client in TypeScript: made from the served contract, compiled strictly, run against the service."""

import json
import shutil
import subprocess

import pytest

from forebay.api.examples import request_example
from forebay.api.media import JSON
from forebay.api.routers.registry import OPERATIONS
from support.node import CLIENTS, MODULES, needs_node, run_node

pytestmark = needs_node

HEAD = """\
import createClient from "openapi-fetch";
import type { paths } from "./contract.js";
declare const process: { argv: string[] };
type Media = "application/json" | "application/problem+json" | "image/svg+xml";
const client = createClient<paths, Media>({ baseUrl: process.argv[2] ?? "" });
const seen: Record<string, unknown> = {};
"""

CALL = """\
{{
  const {{ data, error, response }} = await client.POST({path}, {{ body: {body}, parseAs: {reading} }});
  if (error !== undefined) throw new Error(`{name}: ${{error.title}}: ${{error.detail}}`);
  seen[{name}] = {{ status: response.status, isThere: data !== undefined }};
}}
"""


def call(operation):
    """A typed call of one operation with its example; a body that does not fit the types does not compile."""
    reading = "json" if JSON in operation.media_types else "text"
    parts = {"path": operation.path, "body": request_example(operation.operation_id), "reading": reading}
    return CALL.format(
        name=json.dumps(operation.operation_id), **{name: json.dumps(part) for name, part in parts.items()}
    )


@pytest.fixture(scope="module")
def built(contract, tmp_path_factory):
    """Folder of the compiled programs: the written one, and one that calls every operation."""
    folder = tmp_path_factory.mktemp("typescript")
    (folder / "node_modules").symlink_to(MODULES)
    for name in ("package.json", "tsconfig.json", "assess.ts"):
        shutil.copy(CLIENTS / name, folder)
    run_node(
        "openapi-typescript",
        str(contract),
        "--default-non-nullable=false",
        "--output",
        "contract.d.ts",
        folder=folder,
    )
    calls = "".join(call(operation) for operation in OPERATIONS.values())
    (folder / "every.ts").write_text(f"{HEAD}{calls}console.log(JSON.stringify(seen));\n", encoding="utf-8")
    run_node("tsc", "--project", ".", folder=folder)
    return folder / "built"


def test_every_operation_can_be_called(built, service):
    seen = json.loads(run_node("node", "every.js", service.address, folder=built))
    assert seen == {name: {"status": 200, "isThere": True} for name in OPERATIONS}


def test_written_program_gets_what_it_asks_for(built, service):
    answer = json.loads(run_node("node", "assess.js", service.address, folder=built))
    assert answer["elements"] == ["intake at 0, 0", "outfall at 3, 0"]
    assert 0.0 < answer["recirculation"] < 1.0
    assert len(answer["u"]) == 1
    assert answer["refusal"] == ["/problems/invalid-request", ["#/layout/depth"]]


@pytest.mark.parametrize(
    "wrong",
    [
        "at: { x: [5], y: [0], line: { from: [0, 0], to: [1, 0], count: 2 } }",
        'at: { points: [["5", 0]] }',
        "at: { point: [[5, 0]] }",
    ],
    ids=["two-ways", "text-for-a-number", "misspelt"],
)
def test_wrong_request_does_not_compile(built, wrong):
    folder = built.parent
    body = f"{{ layout: {{ depth: 4 }}, {wrong} }}"
    program = f"{HEAD}void seen;\nawait client.POST('/v1/field/sample', {{ body: {body} }});\n"
    (folder / "wrong.ts").write_text(program, encoding="utf-8")
    command = [str(MODULES / ".bin" / "tsc"), "--project", ".", "--noEmit"]
    outcome = subprocess.run(command, cwd=folder, capture_output=True, text=True, check=False)
    (folder / "wrong.ts").unlink()
    assert outcome.returncode != 0
    assert all(line.startswith((" ", "wrong.ts")) for line in outcome.stdout.splitlines())
