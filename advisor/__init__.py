"""Twolight: which lens, which coating, which ghost image; worked out for one wearer.

Layers, from the top: ``cli``, ``web``, ``records``, ``counsel``, ``optics``, then ``errors`` and ``resources``.
A module imports only from its own layer and from those below it.
"""

from importlib.metadata import PackageNotFoundError, version

try:
    __version__ = version("twolight")
except PackageNotFoundError:  # the sources are run without having been installed
    __version__ = "0+uninstalled"
