"""One module per kind of file written; each is found by its name, there is no registry to edit.

A module called ``to_<kind>.py`` in this package is an output. It holds one constant::

    FILES: Mapping[str, FileWriter] = {"beams.csv": write_beams, "{model}.audited.ifc": write_model}

The key is the file name, in which ``{model}`` stands for the name of the audited model without its extension. The value
is a function ``(audit, source, target, units) -> None`` that writes that one file to ``target``: ``audit`` is the
record, ``source`` the model that was audited (never to be changed), ``units`` is ``si`` or ``us``. It need not care
about half-written files: :mod:`ifcaudit.outputs.files` lets it write into a temporary folder and moves the result.
The same audit must give the same bytes: no timestamps, no set or hash order.
"""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import TypeAlias

from ifcaudit.model.audit import Audit

FileWriter: TypeAlias = Callable[[Audit, Path, Path, str], None]
