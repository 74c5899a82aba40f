"""Exits: where the streams of a register leave it, and the shift registers behind them."""

from pathlib import Path

from tests.support.drafts import drafted, proposed

HEAD = "module t (input clk, input se, input x, output [3:0] so, output dbg);\n  wire [3:0] g;\n  wire n, c0, c1, l;\n"
REGISTER = "  xor2 f (.A(g[3]), .B(g[2]), .Y(n));\n" + "".join(
    f"  ff_plain g{k}_ff (.CK(clk), .D({'n' if k == 0 else f'g[{k - 1}]'}), .Q(g[{k}]));\n" for k in range(4)
)


def shift(name: str, net: str, length: int, scan: bool) -> str:
    """Return a shift register behind a net: plain, or through a scan multiplexer with other data beside it."""
    lines = [f"  wire [{length - 1}:0] {name};"]
    for k in range(length):
        data = f"{name}[{k - 1}]" if k else net
        cell, pins = ("ff_scan", f".SE(se), .SI({data}), .D(l)") if scan else ("ff_plain", f".D({data})")
        lines.append(f"  {cell} {name}{k}_ff (.CK(clk), {pins}, .Q({name}[{k}]));")
    return "\n".join(lines) + "\n"


CHAINS = (
    "  xor2 x0 (.A(g[0]), .B(g[2]), .Y(c0));\n  xor2 x1 (.A(g[1]), .B(g[3]), .Y(c1));\n"
    + shift("first", "c0", 30, scan=True)
    + shift("second", "c1", 20, scan=True)
    + "  and2 y (.A(first[29]), .B(x), .Y(l));\n"
)


def test_nets_that_feed_scan_chains_are_channels(tmp_path: Path) -> None:
    """Where no port shows a mixed stream, the nets before the chains are channels, and the chains are measured."""
    text = HEAD + REGISTER + CHAINS + "  assign dbg = second[19];\nendmodule\n"
    found = proposed(drafted(tmp_path, text))
    assert found.names == ("c0", "c1")
    assert found.chain_lengths == (20, 30)


def test_ports_come_before_chains(tmp_path: Path) -> None:
    """Where output ports show mixed streams they are the channels; a port that shows one bit unmixed is left out."""
    ports = "".join(f"  xor2 p{k} (.A(g[{k}]), .B(g[{(k + 1) % 4}]), .Y(so[{k}]));\n" for k in range(4))
    text = HEAD + REGISTER + CHAINS + ports + "  assign dbg = g[3];\nendmodule\n"
    found = proposed(drafted(tmp_path, text))
    assert found.names == tuple(f"so[{k}]" for k in range(4))
    (left,) = [channel for channel in found.channels if not channel.kept]
    assert left.name == "dbg"
    assert "unmixed" in left.reason


def test_a_plain_shift_register_is_a_chain_and_a_short_one_a_pipeline(tmp_path: Path) -> None:
    """A port behind two flip-flops is a channel; behind twenty the net before them is one."""
    short = shift("short", "c0", 2, scan=False) + "  assign so[0] = short[1];\n"
    long = shift("long", "c0", 20, scan=False) + "  assign so[0] = long[19];\n"
    mixed = "  xor2 x0 (.A(g[0]), .B(g[2]), .Y(c0));\n"
    assert proposed(drafted(tmp_path, HEAD + REGISTER + mixed + short + "endmodule\n")).names == ("so[0]",)
    found = proposed(drafted(tmp_path, HEAD + REGISTER + mixed + long + "endmodule\n"))
    assert found.names == ("c0",)
    assert found.chain_lengths == (20,)


def test_a_gate_before_the_ports_is_opened(tmp_path: Path) -> None:
    """Streams that a port can block are let through by the constant that their refusals name."""
    gates = "".join(
        f"  wire y{k};\n  xor2 p{k} (.A(g[{k}]), .B(g[{(k + 1) % 4}]), .Y(y{k}));\n"
        f"  and2 o{k} (.A(y{k}), .B(x), .Y(so[{k}]));\n"
        for k in range(4)
    )
    found = drafted(tmp_path, HEAD + REGISTER + gates + "endmodule\n")
    assert {c.name: c.value for c in proposed(found).constants} == {"x": 1}
    assert len(proposed(found).names) == 4
