"""The native solvers of the bundle: what python-mip loads at run time, in the folders it looks in."""

from __future__ import annotations

import sys
from pathlib import Path

import cbcbox
import highsbox

# of 598 MB that cbcbox installs these are loaded; debug builds and static libraries are not
CBC_LINUX = (
    "libCbc.so", "libCgl.so.0", "libClp.so.0", "libCoinUtils.so.0", "libOsi.so.0", "libOsiClp.so.0",
    "libgfortran.so.5", "libopenblas.so.0", "libquadmath.so.0",
)  # fmt: skip
BUILDS = ("cbc_dist", "cbc_dist_avx2")  # for any processor, and for those of the last ten years

Files = list[tuple[str, str]]


def cbc_files() -> Files:
    """(file, folder in the bundle) of CBC, of both builds where there are two."""
    package = Path(cbcbox.__file__).parent
    builds = [package / name for name in BUILDS if (package / name).is_dir()]
    return [(str(file), f"cbcbox/{file.parent.relative_to(package)}") for b in builds for file in _cbc_of(b)]


def _cbc_of(build: Path) -> list[Path]:
    if sys.platform == "linux":
        return [build / "lib" / name for name in CBC_LINUX]
    if sys.platform == "win32":
        return sorted((build / "bin").glob("*.dll"))
    return sorted((build / "lib").glob("*.dylib"))


def highs_files() -> Files:
    """The same of HiGHS: its library; the linear algebra beside it serves methods that are not asked for."""
    package = Path(highsbox.__file__).parent
    folder, name = {
        "win32": ("bin", "*.dll"),
        "darwin": ("lib", "libhighs*.dylib"),
    }.get(sys.platform, ("lib", "libhighs.so*"))
    found = sorted((package / "highs_dist" / folder).glob(name))
    return [(str(file), f"highsbox/highs_dist/{folder}") for file in found]
