"""The files of the documentation page are the published ones, with their licence."""

import hashlib
from importlib.resources import files

import pytest

HASHES = {
    "swagger-ui-bundle.js": "e6a898692f2d768e807c3ba4626068a69a2c5dd960dd6c76f3e4d3a3de180af2",
    "swagger-ui.css": "5ed08757e53da3e026d6cbecc61fe5d43585c9560b302d534ad56692519a273d",
    "favicon-32x32.png": "3ed612f41e050ca5e7000cad6f1cbe7e7da39f65fca99c02e99e6591056e5837",
    "swagger-ui.LICENSE": "cfc7749b96f63bd31c3c42b5c471bf756814053e847c10f3eb003417bc523d30",
}
"""SHA-256 of the files of swagger-ui-dist 5.35.0 as published."""


@pytest.mark.parametrize("name", HASHES)
def test_vendored_file_is_the_published_one(name):
    content = (files("forebay.api") / "pages" / name).read_bytes()
    assert hashlib.sha256(content).hexdigest() == HASHES[name]
