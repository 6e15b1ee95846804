"""What a run was made from and what it left: enough to make it again, and to see what was changed since."""

from __future__ import annotations

import hashlib
import json
import platform
from collections.abc import Sequence
from typing import Any

from optimiser.records.folders import RunFolder


def sha256(content: bytes) -> str:
    """Hash of a file's content as 64 hexadecimal digits."""
    return hashlib.sha256(content).hexdigest()


def provenance_text(
    provenance: dict[str, Any], folder: RunFolder, *, command: Sequence[str], sets: Sequence[str]
) -> str:
    """JSON of the result's own provenance, the command, the system, and the hash of each file so far."""
    files = {name: sha256((folder.staging / name).read_bytes()) for name in sorted(folder.files)}
    record = {
        **provenance,
        "command": list(command),
        "sets": list(sets),
        "system": f"{platform.system()} {platform.machine()}",
        "files": {name: digest for name, digest in files.items() if name != "run.log"},
    }
    return json.dumps(record, indent=2, allow_nan=False) + "\n"
