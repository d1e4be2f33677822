"""JESD3 fuse files: one door to model, reader, strict mode and writer."""

from pla.fuses.jesd3_model import Field, Frame, FuseDiagnostic, FuseFile, RefusedFile, Vector
from pla.fuses.jesd3_read import FuseFileError, read_fuse_file
from pla.fuses.jesd3_strict import departures
from pla.fuses.jesd3_write import write_fuse_file

__all__ = [
    "Field",
    "Frame",
    "FuseDiagnostic",
    "FuseFile",
    "FuseFileError",
    "RefusedFile",
    "Vector",
    "departures",
    "read_fuse_file",
    "write_fuse_file",
]
