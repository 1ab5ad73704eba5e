"""Readiness means that no request waits for a compiler: rehearsals take every kernel that requests take."""

import json
import subprocess
import sys

import pytest

SCRIPT = """
import json
import sys
import orjson
from numba.core.registry import CPUDispatcher
from forebay.api.examples import CHANNEL, LINED, RINGED, rehearsals, request_example
from forebay.api.limits import Limits
from forebay.api.operation import perform
from forebay.api.outcome import Reply
from forebay.api.routers.registry import OPERATIONS
from forebay.settings import Settings

def run(operation_id, request):
    operation = OPERATIONS[operation_id]
    reply = perform(operation, orjson.dumps(request), operation.media_types[0], limits=Limits.of(Settings()))
    assert isinstance(reply, Reply), (operation_id, reply)

def compiled():
    modules = [module for name, module in list(sys.modules.items()) if name.startswith("forebay.flow")]
    values = [value for module in modules for value in vars(module).values()]
    kernels = {value for value in values if isinstance(value, CPUDispatcher)}
    return {f"{k.py_func.__module__}.{k.py_func.__name__}{s}" for k in kernels for s in k.signatures}

for operation_id in OPERATIONS:
    for request in rehearsals(operation_id):
        run(operation_id, request)
before = compiled()
bay = {"kind": "line-sink", "name": "bay", "from": [-30, 0], "to": [-24, 0], "discharge": 0.4}
groyne = {"kind": "outline", "name": "groyne", "points": [[10, 0], [12, 0], [12, 8], [10, 8]]}
mixed = CHANNEL | {"elements": [*CHANNEL["elements"], bay], "structures": [groyne]}
for layout in (*LINED, mixed, RINGED):
    run("searchStagnation", {"layout": layout})
    run("traceWithdrawal", {"layout": layout})
    run("integrateContour", request_example("integrateContour") | {"layout": layout})
print(json.dumps(sorted(compiled() - before)))
"""


@pytest.mark.slow
def test_rehearsals_take_every_kernel():
    """In a process of its own: what other tests have compiled is compiled there already."""
    done = subprocess.run([sys.executable, "-c", SCRIPT], capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr
    assert json.loads(done.stdout.splitlines()[-1]) == []
