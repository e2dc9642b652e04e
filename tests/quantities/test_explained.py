"""Methods stand once, with formula, source and mark."""

from commission.quantities import Explained, Input, Kind, methods


def test_each_method_is_complete() -> None:
    """Every method has a name, a formula, a source and a mark, and its key is a plain word."""
    for key, method in methods().items():
        assert key.replace("_", "").isalnum()
        assert all((method.name, method.formula, method.source, method.mark))


def test_explained_carries_what_went_in() -> None:
    """A calculated number holds its inputs with their origin."""
    one = Explained("pressure_ratio", 4.0, None, "x", (Input("suction_pressure", 2e5, Kind.PRESSURE, "reading"),))
    assert one.inputs[0].origin == "reading"
    assert one.assumptions == ()
