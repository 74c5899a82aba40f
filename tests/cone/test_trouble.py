from pathlib import Path

from tests.support.cones import troubles_of


def test_an_open_pin_beside_one_that_the_cell_has_not_names_both(tmp_path: Path) -> None:
    """Where an input is open because its pin is misspelt, the message names the pin that was written."""
    body = "  wire a;\n  km_dff a_ff (.CK(clk), .DX(a), .Q(a));\n  km_buf out (.A(a), .Y(y));"
    assert troubles_of(tmp_path, body) == [
        "t.v:3: input D of a_ff (km_dff) inside the cone is not connected; its cell has no pin DX; "
        "connect it or tie it to 0 or 1"
    ]
