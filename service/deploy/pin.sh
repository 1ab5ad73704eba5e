#!/bin/sh
# Pins what the image installs, with hashes: run it after a change of the dependencies in pyproject.toml. Needs uv.
set -eu
cd "$(dirname "$0")/../.."

pin() {
    uv pip compile --quiet --python-platform linux --python-version 3.11 --generate-hashes --no-header --no-annotate \
        --no-emit-index-url --no-emit-find-links "$@"
}

pin --extra arrow pyproject.toml --output-file service/requirements.txt
sed -n 's/^requires = \["\(.*\)"\]$/\1/p' pyproject.toml | pin - --output-file service/requirements-build.txt
