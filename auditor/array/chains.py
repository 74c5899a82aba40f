"""Where the chains are known from: their common length, a file, or the netlist itself."""

from auditor.array.chain_file import read_chain_file
from auditor.array.scan_array import Chain, ScanArray
from auditor.array.trace import trace_chains
from auditor.cone.cone import Cone
from auditor.plan import Plan


def scan_array(plan: Plan, cone: Cone, behind_outputs: Cone | None = None) -> ScanArray | None:
    """Return the chains behind the channels of the cone, None where the plan does not tell them.

    ``behind_outputs`` is the cone of the scan outputs, where the plan names any. Raises ``InputError``.
    """
    names = [channel.name for channel in cone.channels]
    if behind_outputs is not None:
        return trace_chains(behind_outputs, cone)
    if plan.chain_file:
        return read_chain_file(plan.chain_file, dict.fromkeys(names))
    if plan.chain_length:
        return ScanArray(tuple(Chain(name, plan.chain_length) for name in names), "length")
    return None
