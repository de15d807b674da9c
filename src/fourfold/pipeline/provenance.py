"""Where the numbers came from: hashes, versions, seed."""

from __future__ import annotations

import platform
from importlib import metadata

from fourfold import __version__
from fourfold.data.prepare import Prepared
from fourfold.description.read import Loaded
from fourfold.results import tree

USED = ("jinja2", "numpy", "pandas", "pydantic", "pyyaml", "scipy", "weasyprint")


def provenance_of(loaded: Loaded, prepared: Prepared, iterations: int | None) -> tree.Provenance:
    """Everything needed to run it again; paths are names only, never folders of a machine."""
    return tree.Provenance(
        fourfold=__version__,
        python=platform.python_version(),
        packages={name: metadata.version(name) for name in USED},
        data_file=loaded.description.data.file,
        data_sha256=prepared.sha256,
        description_file=loaded.path.name,
        description_sha256=loaded.sha256,
        description=loaded.text,
        rows_read=prepared.rows_read,
        columns_read=list(prepared.columns_read),
        seed=loaded.description.analysis.seed,
        engine="memory",
        iterations=iterations,
    )
