"""The catalog's motors as arrays for the search."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from ...schema.operation.machines import Machines, coulomb_torque
from ..requirement.read import Requirement, RequirementError
from ..requirement.where import columns_of
from ..store.columns import ARMATURE, CURRENTS, ENDS, FURTHER, JUDGED, SHOWN

if TYPE_CHECKING:
    from ..store import Catalog

Array = NDArray[np.float64]


@dataclass
class Fleet:
    """M motors: their ids, the columns that were loaded, and what physics needs of them."""

    columns: Mapping[str, Array]
    machines: Machines

    def __len__(self) -> int:
        return len(self.columns["id"])

    @property
    def ids(self) -> NDArray[np.int64]:
        return self.columns["id"].astype(np.int64)


def machines_of(columns: Mapping[str, Array]) -> Machines:
    """The columns as `Machines`."""
    n = len(columns["id"])
    friction = coulomb_torque(
        columns["friction_torque"],
        columns["torque_constant"],
        columns["no_load_current"],
        columns["viscous_damping"],
        columns["armature_resistance"],
        columns["nominal_voltage"],
    )
    built = {key: columns[key] for key in JUDGED}
    built |= {key: columns[f"{ARMATURE}{key}"] for key in CURRENTS}
    return Machines(
        **built,
        coulomb_torque=np.broadcast_to(friction, (n,)),
        commutation=np.nan_to_num(columns["commutation"]).astype(np.int8),
    )


def load_fleet(catalog: Catalog, requirement: Requirement | None = None) -> Fleet:
    """All motors of the catalog with the columns that a requirement needs."""
    names: Sequence[str] = [
        *JUDGED,
        *(f"{ARMATURE}{key}" for key in CURRENTS),
        *FURTHER,
        *SHOWN,
    ]
    if requirement is not None:
        names = [*names, *columns_of(requirement.where)]
        if requirement.tolerance == "printed":
            names = [*names, *ENDS]
    try:
        columns = catalog.columns(names)
    except KeyError as error:
        raise RequirementError(f"The catalog keeps no figure {error.args[0]}.") from None
    return Fleet(columns, machines_of(columns))
