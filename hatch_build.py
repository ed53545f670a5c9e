"""Build hook of hatchling: compiles the kernel into the wheel, which fits the platform and any Python 3."""

import importlib.util
import sysconfig
from pathlib import Path

from hatchling.builders.hooks.plugin.interface import BuildHookInterface


def _compile():
    path = Path(__file__).parent / "reactor" / "kernel" / "build.py"
    spec = importlib.util.spec_from_file_location("kernel_build", path)
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


class KernelBuildHook(BuildHookInterface):
    """Compile the kernel before the wheel (also an editable one) is put together."""

    def dependencies(self):
        """Ask for the compiler that PyPI ships only where the machine has none."""
        return [] if _compile().compiler() else ["ziglang>=0.13"]

    def initialize(self, version, build_data):
        """Compile, and say that the wheel belongs to this platform."""
        if self.target_name != "wheel":
            return
        library = _compile().build()
        build_data["artifacts"].append(library.relative_to(self.root).as_posix())
        build_data["pure_python"] = False
        platform = sysconfig.get_platform().replace("-", "_").replace(".", "_")
        build_data["tag"] = f"py3-none-{platform}"
