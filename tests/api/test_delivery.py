"""Compression and entity tags of answers."""

import gzip

import brotli
import pytest
import zstandard

from forebay.api.delivery import SMALLEST, content_encoding
from support.http import SAMPLE, a_sample, assert_problem

LONG = a_sample(at={"line": {"from": [0, 9], "to": [90, 9], "count": 400}})
UNPACK = {"zstd": zstandard.decompress, "br": brotli.decompress, "gzip": gzip.decompress}


def raw(client, body, **headers):
    """Answer with its bytes as they were sent."""
    with client.stream("POST", SAMPLE, json=body, headers=headers) as response:
        return response, b"".join(response.iter_raw())


@pytest.mark.parametrize("encoding", UNPACK)
def test_long_answers_are_compressed_and_unpack_to_the_same(ready_client, encoding):
    plain, whole = raw(ready_client, LONG, **{"Accept-Encoding": "identity"})
    packed, parcel = raw(ready_client, LONG, **{"Accept-Encoding": encoding})
    assert "content-encoding" not in plain.headers
    assert packed.headers["content-encoding"] == encoding
    assert int(packed.headers["content-length"]) == len(parcel) < len(whole)
    assert UNPACK[encoding](parcel) == whole
    for response in (plain, packed):
        assert "Accept-Encoding" in response.headers["vary"]
    assert packed.headers["etag"] != plain.headers["etag"]


def test_short_answers_are_not_compressed(ready_client):
    response, body = raw(ready_client, {"fluid": {}, **a_sample()}, **{"Accept-Encoding": "zstd"})
    assert len(body) < SMALLEST
    assert "content-encoding" not in response.headers


@pytest.mark.parametrize(
    ("accept", "encoding"),
    [
        (None, None),
        ("", None),
        ("identity", None),
        ("gzip", "gzip"),
        ("gzip, deflate, br, zstd", "zstd"),
        ("gzip;q=1, br;q=0.5", "gzip"),
        ("*", "zstd"),
        ("*;q=0", None),
        ("zstd;q=0, *", "br"),
        ("gzip;q=nonsense", None),
        ("GZIP", "gzip"),
    ],
)
def test_accept_encoding_decides(accept, encoding):
    assert content_encoding(accept) == encoding


def test_answer_that_the_client_holds_is_not_sent_again(ready_client):
    first = ready_client.post(SAMPLE, json=LONG)
    again = ready_client.post(
        SAMPLE, json=LONG, headers={"If-None-Match": f'"other", {first.headers["etag"]}'}
    )
    assert again.status_code == 304
    assert again.content == b""
    assert first.headers["etag"][:20] == again.headers["etag"][:20]
    assert again.headers["access-control-allow-origin"] == "*"


@pytest.mark.parametrize("change", [{"digits": 8}, {"unit_system": "us"}, {"quantities": ["head_change"]}])
def test_another_request_has_another_tag(ready_client, change):
    tag = ready_client.post(SAMPLE, json=a_sample()).headers["etag"]
    other = ready_client.post(SAMPLE, json=a_sample(**change), headers={"If-None-Match": tag})
    assert other.status_code == 200
    assert other.headers["etag"] != tag


def test_media_types_have_tags_of_their_own(ready_client):
    tags = {
        ready_client.post(SAMPLE, json=a_sample(), headers={"Accept": accept}).headers["etag"]
        for accept in ("application/json", "text/csv", "application/x-npy")
    }
    assert len(tags) == 3


def test_refused_request_has_no_tag(ready_client):
    response = ready_client.post(SAMPLE, json=a_sample(digits=3))
    assert_problem(response, 422, "invalid-request")
    assert "etag" not in response.headers


@pytest.mark.parametrize("path", ["/v1/criteria", "/v1/warnings", "/v1/limits", "/openapi.json"])
def test_catalogues_are_revalidated(client, path):
    first = client.get(path)
    again = client.get(path, headers={"If-None-Match": first.headers["etag"]})
    assert (first.status_code, again.status_code) == (200, 304)
    assert again.content == b""


@pytest.mark.parametrize("path", ["/livez", "/metrics"])
def test_states_are_never_kept(client, path):
    response = client.get(path)
    assert "etag" not in response.headers
    assert response.headers["cache-control"] == "no-store"
