"""What to do when a library is not there: the exact command that brings it."""

from __future__ import annotations

# Shared libraries the CAD kernel loads from the system, and the Debian 12 packages that hold them
# (`dpkg -S`, Debian 12; names differ elsewhere).
DEBIAN = {
    "libGL.so": "libgl1",
    "libX11.so": "libx11-6",
    "libxcb.so": "libxcb1",
    "libXau.so": "libxau6",
    "libXdmcp.so": "libxdmcp6",
    "libexpat.so": "libexpat1",
    "libgomp.so": "libgomp1",
    "libz.so": "zlib1g",
}
# What pip calls a package whose module is named otherwise.
PIP = {"OCP": "cadquery-ocp", "skrf": "scikit-rf"}


def missing(err: ImportError) -> str | None:
    """Message for an import that failed for want of something to install; None for any other failure."""
    text = str(err)
    for start, package in DEBIAN.items():
        if start in text:
            name = text.split(":", 1)[0]
            return (
                f"the CAD kernel needs {name} of this machine, which is not there. On Debian and its kin: "
                f"sudo apt-get install {package}; elsewhere install the package that holds {name}. `wavejig check` "
                "works without it."
            )
    if isinstance(err, ModuleNotFoundError) and err.name and not err.name.startswith("wavejig"):
        module = err.name.split(".", 1)[0]
        name = PIP.get(module, module)
        return f"the Python package {name} is not installed here: python3 -m pip install {name}"
    return None
