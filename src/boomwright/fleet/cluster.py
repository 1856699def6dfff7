"""The same fleet on many machines: a dask scheduler behind the `Executor` interface."""

from __future__ import annotations

from collections.abc import Iterator
from concurrent.futures import Executor
from contextlib import contextmanager

from boomwright.errors import AccessError, Fault, InputFault

WAIT_S = 10


@contextmanager
def executor_at(address: str | None) -> Iterator[Executor | None]:
    """An executor on the scheduler at an address (`tcp://host:8786`); None for None.

    Its workers need this version of the package and the fleet's folder under the same path. Raises InputFault when
    dask.distributed is not installed or the address is none, AccessError when nobody answers there.
    """
    if address is None:
        yield None
        return
    try:
        from distributed import Client
    except ImportError:
        fix = "pip install boomwright[cluster]"
        raise InputFault([Fault("--scheduler", "dask.distributed is not installed", fix)]) from None
    try:
        client = Client(address, timeout=WAIT_S, set_as_default=False)
    except ValueError as error:
        fix = "give the address that the scheduler printed, tcp://host:8786"
        raise InputFault([Fault("--scheduler", f"{address} is not an address: {error}", fix)]) from None
    except (OSError, TimeoutError) as error:
        raise AccessError(f"no scheduler answers at {address}: {error}") from error
    with client, client.get_executor() as executor:
        yield executor
