"""The README as its reader meets it: fenced blocks, commands, table rows."""

import re

from support.tree import ROOT

README = ROOT / "README.md"
ADDRESS = "http://127.0.0.1:8620"
"""Address that the examples of the README call."""

FENCE = re.compile(r"^```(\w+)\n(.*?)^```$", re.MULTILINE | re.DOTALL)


def blocks(language: str) -> list[str]:
    """Contents of the fenced blocks in one language."""
    return [
        content for name, content in FENCE.findall(README.read_text(encoding="utf-8")) if name == language
    ]


def blocks_under(heading: str, language: str) -> list[str]:
    """Contents of the fenced blocks in one language under a heading of the second level."""
    return [content for name, content in FENCE.findall(under(heading)) if name == language]


def under(heading: str) -> str:
    """Text under a heading of the second level."""
    return README.read_text(encoding="utf-8").split(f"\n## {heading}\n", 1)[1].split("\n## ", 1)[0]


def curl_commands() -> list[str]:
    """Each curl command with its continuation lines, as it would be pasted."""
    commands: list[str] = []
    for block in blocks("sh"):
        for line in block.splitlines():
            if line.startswith("curl "):
                commands.append(line)
            elif commands and is_open(commands[-1]):
                commands[-1] += f"\n{line}"
    return commands


def is_open(command: str) -> bool:
    """Whether a command goes on in the next line: a trailing backslash or an unclosed quote."""
    return command.endswith("\\") or command.count("'") % 2 == 1


def rows(heading: str) -> list[list[str]]:
    """Cells of the table under a heading of the second level, its heading row left out."""
    lines = [line for line in under(heading).splitlines() if line.startswith("|")]
    return [[cell.strip(" `") for cell in line.strip("|").split("|")] for line in lines[2:]]
