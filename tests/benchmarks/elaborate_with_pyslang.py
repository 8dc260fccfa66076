"""Parses and elaborates a Verilog file with pyslang: python elaborate_with_pyslang.py FILE [STUBS]

STUBS holds a stub module for each cell that the file does not have.
"""

from __future__ import annotations

import sys

from pyslang.ast import Compilation
from pyslang.syntax import SyntaxTree


def main() -> None:
    """Elaborate; asking for all diagnostics forces the elaboration of everything."""
    compilation = Compilation()
    for file in sys.argv[1:]:
        compilation.addSyntaxTree(SyntaxTree.fromFile(file))
    compilation.getRoot()
    compilation.getAllDiagnostics()


if __name__ == "__main__":
    main()
