"""Reading a description brings in nothing heavy before there is something to check."""

from __future__ import annotations

import subprocess
import sys

HEAVY = ("numpy", "pandas", "scipy", "pydantic", "pyarrow", "weasyprint")


def test_import_of_the_reader_is_light() -> None:
    code = "import sys, fourfold.description.read as r; print(sorted(m for m in sys.modules if '.' not in m))"
    shown = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True).stdout
    assert "'yaml'" in shown
    for module in HEAVY:
        assert f"'{module}'" not in shown


def test_loading_needs_no_numerics() -> None:
    code = (
        "import sys; from fourfold.description import keys; keys.schema(); keys.explain(None);"
        "print(sorted(m for m in sys.modules if '.' not in m))"
    )
    shown = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True).stdout
    assert "'pydantic'" in shown
    for module in ("numpy", "pandas", "scipy", "pyarrow"):
        assert f"'{module}'" not in shown
