"""The forward room stands alone: it loads neither the algebraic section nor what that needs."""

from __future__ import annotations

import subprocess
import sys

CODE = """
import sys
import optimiser.forward.audit
import optimiser.forward.limits
loaded = {name.partition(".")[0] for name in sys.modules}
print(sorted(loaded & {"pyomo", "scipy", "cyipopt", "casadi"}))
print(sorted(n for n in sys.modules if n.startswith(("optimiser.section", "optimiser.solve"))))
"""


def test_nothing_heavy_and_no_equations_are_loaded() -> None:
    done = subprocess.run([sys.executable, "-c", CODE], capture_output=True, text=True, check=True)
    assert done.stdout.splitlines() == ["[]", "[]"]
