"""The command `forebay`: serve, demo, assess, openapi."""

import argparse
import json
import sys
from collections.abc import Sequence
from pathlib import Path

from forebay.kernel_cache import settle_kernel_cache
from forebay.settings import SettingsError

FAILURE = 1
"""Exit code for a service that did not start."""

WRONG_REQUEST = 2
"""Exit code for a layout or a command line that is wrong."""


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command; the value is the exit code of the process."""
    parser = build_parser()
    chosen = parser.parse_args(arguments)
    run = {"serve": serve, "demo": demo, "assess": assess, "openapi": openapi}[chosen.command]
    try:
        if note := settle_kernel_cache():
            print(f"forebay: {note}", file=sys.stderr)
        return run(chosen)
    except SettingsError as error:
        print(f"forebay: {error}", file=sys.stderr)
        return WRONG_REQUEST


def build_parser() -> argparse.ArgumentParser:
    """Parser of the command line."""
    parser = argparse.ArgumentParser(
        prog="forebay", description="Screening of water intakes and outfalls by depth-mean potential flow."
    )
    commands = parser.add_subparsers(dest="command", required=True, metavar="COMMAND")
    serving = commands.add_parser("serve", help="run the service until Ctrl-C")
    serving.add_argument("--host", help="address to listen on (default: FOREBAY_HOST or 127.0.0.1)")
    serving.add_argument("--port", type=int, help="port to listen on (default: FOREBAY_PORT or 8620)")
    showing = commands.add_parser("demo", help="start the service and assess an invented site over HTTP")
    showing.add_argument("--keep", action="store_true", help="stay up until Ctrl-C")
    showing.add_argument("--output", type=Path, default=Path("demo-output"), help="folder for the picture")
    assessing = commands.add_parser("assess", help="assess a layout without a server")
    assessing.add_argument("file", type=Path, help="a layout, or the body of /v1/assessment, as JSON")
    assessing.add_argument("--sheet", type=Path, help="write the calculation sheet too: a .pdf or .html file")
    commands.add_parser("openapi", help="print the OpenAPI document")
    return parser


def serve(chosen: argparse.Namespace) -> int:
    """Listen until interrupted."""
    from forebay.server import run_server

    return run_server(host=chosen.host, port=chosen.port)


def demo(chosen: argparse.Namespace) -> int:
    """Show the whole job on an invented site."""
    from forebay.demo.child import ServiceError
    from forebay.demo.run import run_demo

    try:
        return run_demo(chosen.output, keep=chosen.keep)
    except ServiceError as error:
        print(f"forebay: {error}", file=sys.stderr)
        return FAILURE


def assess(chosen: argparse.Namespace) -> int:
    """Print the table of one file and write its sheet if asked to, or say what is wrong."""
    from forebay.assess import FileError, assess_file

    try:
        print(assess_file(chosen.file, chosen.sheet))
    except FileError as problem:
        print(problem, file=sys.stderr)
        return WRONG_REQUEST
    return 0


def openapi(_chosen: argparse.Namespace) -> int:
    """Print the OpenAPI document as it is committed."""
    from forebay.app import create_app
    from forebay.settings import Settings

    print(json.dumps(create_app(Settings()).openapi(), indent=2, ensure_ascii=False))
    return 0
