"""Write a resolved scene as YAML that reads back to exactly the same values."""

from __future__ import annotations

import os
import re
import tempfile
import textwrap
from pathlib import Path as FilePath
from typing import Any

import yaml

from ..cautions import CAUTION
from ..errors import Misuse
from .resolve import ResolvedScene
from .scalars import DECIMAL, FLAG, INTEGER, NOTHING

WIDTH = 110
OPENING = """{caution}
# A scene with everything resolved: it needs no plugins, and planning it gives the same figures again.
# fingerprint: {fingerprint}
"""


class _Dumper(yaml.SafeDumper):
    """Writes words plain only where this program's own reader takes them for the same words."""

    yaml_implicit_resolvers: dict = {}

    def ignore_aliases(self, data: Any) -> bool:
        return True


for _tag, _rule, _first in (("null", NOTHING, list("~n") + [""]), ("bool", FLAG, list("tf")),
                            ("int", INTEGER, list("-+0123456789")), ("float", DECIMAL, list("-+.0123456789"))):
    _Dumper.add_implicit_resolver(f"tag:yaml.org,2002:{_tag}", re.compile(f"(?:{_rule.pattern})$"), _first)



def _represent_list(dumper: yaml.SafeDumper, rows: list) -> yaml.Node:
    """Lists of plain values on one line, lists of mappings below each other."""
    flow = not any(isinstance(row, (dict, list)) for row in rows)
    return dumper.represent_sequence("tag:yaml.org,2002:seq", rows, flow_style=flow)


_Dumper.add_representer(list, _represent_list)
_Dumper.add_representer(float, lambda dumper, value: dumper.represent_scalar("tag:yaml.org,2002:float", repr(value)))


def resolved_text(resolved: ResolvedScene) -> str:
    """The resolved scene as YAML text; numbers carry every digit."""
    values = {**resolved.mapping, "marks": resolved.marks}
    if resolved.notes:
        values["notes"] = list(resolved.notes)
    caution = textwrap.fill(CAUTION, WIDTH, initial_indent="# ", subsequent_indent="# ")
    opening = OPENING.format(caution=caution, fingerprint=resolved.fingerprint)
    return opening + yaml.dump(values, Dumper=_Dumper, sort_keys=False, allow_unicode=True, width=WIDTH)


def write_resolved_scene(resolved: ResolvedScene, path: str | os.PathLike) -> None:
    """Write the resolved scene to a file, whole or not at all; raises Misuse where it cannot be written."""
    path = FilePath(path)
    handle = None
    try:
        handle, temporary = tempfile.mkstemp(dir=path.parent, prefix=f".{path.name}.")
        with os.fdopen(handle, "w", encoding="utf-8", newline="\n") as file:
            file.write(resolved_text(resolved))
        os.chmod(temporary, 0o644)
        os.replace(temporary, path)
    except OSError as error:
        if handle is not None:
            FilePath(temporary).unlink(missing_ok=True)
        raise Misuse(f"{path} cannot be written: {error.strerror or error}") from None
