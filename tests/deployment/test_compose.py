"""The compose file is valid, gives no part more than it needs, and agrees with what it mounts."""

import re
import subprocess
import sys

import pytest
import yaml

from forebay.settings import PREFIX, Settings
from support.tree import ROOT

COMPOSE = ROOT / "docker-compose.yml"
DOCUMENT = yaml.safe_load(COMPOSE.read_text(encoding="utf-8"))
SERVICES = DOCUMENT["services"]
REPLICAS = ("forebay-1", "forebay-2")
PROXY = (ROOT / "service" / "deploy" / "nginx.conf").read_text(encoding="utf-8")
SCRAPES = yaml.safe_load((ROOT / "service" / "deploy" / "prometheus.yml").read_text(encoding="utf-8"))


def check_schema(path):
    command = [sys.executable, "-m", "check_jsonschema", "--builtin-schema", "vendor.compose-spec", str(path)]
    return subprocess.run(command, capture_output=True, text=True, check=False)


def test_compose_file_meets_the_compose_schema():
    outcome = check_schema(COMPOSE)
    assert outcome.returncode == 0, outcome.stdout + outcome.stderr


def test_the_schema_check_can_fail(tmp_path):
    wrong = tmp_path / "docker-compose.yml"
    wrong.write_text("services: {forebay: {imagge: forebay}}\n", encoding="utf-8")
    assert check_schema(wrong).returncode == 1


@pytest.mark.parametrize("name", SERVICES)
def test_service_is_confined(name):
    service = SERVICES[name]
    assert service["read_only"] is True
    assert service["cap_drop"] == ["ALL"]
    assert service["security_opt"] == ["no-new-privileges:true"]
    assert not {"privileged", "cap_add", "devices", "network_mode", "pid", "ipc"} & set(service)
    assert {"mem_limit", "cpus", "pids_limit", "restart", "logging"} <= set(service)
    assert not any("docker.sock" in volume for volume in service.get("volumes", ()))


@pytest.mark.parametrize("name", SERVICES)
def test_what_comes_from_outside_is_mounted_read_only(name):
    mounts = [volume for volume in SERVICES[name].get("volumes", ()) if volume.startswith("./")]
    for mount in mounts:
        source, _, mode = mount.split(":")
        assert mode == "ro"
        assert (ROOT / source).is_file()


@pytest.mark.parametrize("name", SERVICES)
def test_image_is_pinned(name):
    assert re.fullmatch(r"[\w./-]+:v?\d+\.\d+[\w.-]*", SERVICES[name]["image"])


def test_service_is_published_on_loopback_only():
    ports = [port for service in SERVICES.values() for port in service.get("ports", ())]
    assert ports
    assert all(port.startswith("127.0.0.1:") for port in ports)


def test_replicas_are_reached_through_the_proxy_only():
    assert DOCUMENT["networks"]["inside"]["internal"] is True
    for name in REPLICAS:
        assert "ports" not in SERVICES[name]
        assert list(SERVICES[name]["networks"]) == ["inside"]


def test_proxy_and_prometheus_know_the_replicas():
    addresses = [SERVICES[name]["networks"]["inside"]["ipv4_address"] + ":8620" for name in REPLICAS]
    assert re.findall(r"^\s*server (\S+:\d+)", PROXY, re.MULTILINE) == addresses
    (job,) = SCRAPES["scrape_configs"]
    assert job["static_configs"] == [{"targets": addresses}]


def test_prometheus_comes_only_when_asked_for():
    assert SERVICES["prometheus"]["profiles"] == ["metrics"]
    (job,) = SCRAPES["scrape_configs"]
    (secret,) = SERVICES["prometheus"]["secrets"]
    assert job["authorization"]["credentials_file"] == f"/run/secrets/{secret}"


def test_replicas_differ_in_their_address_only():
    first, second = ({**SERVICES[name], "networks": None} for name in REPLICAS)
    assert first == second


@pytest.fixture(scope="module")
def tokens(tmp_path_factory):
    path = tmp_path_factory.mktemp("secrets") / "tokens"
    path.write_text("a-token-that-is-long-enough\n", encoding="utf-8")
    return path


def test_environment_of_a_replica_is_one_that_the_service_takes(tokens):
    environment = dict(SERVICES["forebay-1"]["environment"])
    assert environment["FOREBAY_TOKENS_FILE"] == "/run/secrets/forebay-tokens"
    settings = Settings.from_environment({**environment, f"{PREFIX}TOKENS_FILE": str(tokens)})
    assert f"location {settings.root_path}/ {{" in PROXY
    settings.check_access("0.0.0.0")  # noqa: S104  (where the image listens)


def bytes_of(text):
    return int(text[:-1]) * {"m": 2**20, "g": 2**30}[text[-1]]


def test_memory_holds_the_workers_and_the_files_in_memory():
    service = SERVICES["forebay-1"]
    workers = int(service["environment"]["FOREBAY_WORKERS"])
    files = sum(bytes_of(size) for mount in service["tmpfs"] for size in re.findall(r"size=(\w+)", mount))
    # what is left is for the process that serves: 200 MiB at rest and the bodies under way
    left = bytes_of(service["mem_limit"]) - files
    assert left >= workers * Settings.model_fields["worker_memory"].default - 2**30 * 0.25


def test_secrets_are_not_in_the_repository():
    ignored = (ROOT / ".gitignore").read_text(encoding="utf-8").splitlines()
    for secret in DOCUMENT["secrets"].values():
        assert secret["file"].removeprefix(".") in ignored


def test_image_has_the_version_of_the_project():
    project = (ROOT / "pyproject.toml").read_text(encoding="utf-8")
    (version,) = re.findall(r'^version = "(.*)"$', project, re.MULTILINE)
    for name in REPLICAS:
        assert SERVICES[name]["image"] == f"forebay:{version}"
