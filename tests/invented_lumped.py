"""A third INVENTED mechanism for tests, of lumped steps: no such species or reactions exist and no number is measured."""

from copy import deepcopy

from invented import Document, building_blocks


def _orders() -> list[Document]:
    """Real orders and Horiuti's number beside Arrhenius and other laws."""
    return [
        # an inhibiting product, orders of a half
        {"equation": "X + Q2 ⇌ QX + Q", "forward": {"law": "Arrhenius", "A": 8e8, "Ea": 82.0,
                                                    "orders": {"Q2": 1.5, "QX": -0.5}}},
        # a catalyst, an order below one of it
        {"equation": "X2 ⇌ 2 X", "forward": {"law": "Arrhenius", "A": 8e13, "Ea": 410.0, "orders": {"Z": 0.5}}},
        # σ of two and of a half; reverse orders of zero
        {"equation": "2 QX2 + Q2 ⇌ 2 QX + 2 QX", "forward": {"law": "Arrhenius", "A": 3e9, "n": 0.4, "Ea": 190.0,
                                                            "stoichiometric_number": 2, "orders": {"QX2": 1, "Q2": 0.5}}},
        {"equation": "Q + X ⇌ QX", "forward": {"law": "Arrhenius", "A": 3e9, "stoichiometric_number": 0.5,
                                               "orders": {"Q": 2, "X": 2.5}}},
        # σ above every number of the equation: neither direction is smooth at zero without care
        {"equation": "QX2 ⇌ QX + X", "forward": {"law": "Arrhenius", "A": 3e13, "Ea": 440.0, "stoichiometric_number": 3,
                                                 "orders": {"QX2": 0.333333333333333}}},
        # a partner M, and an order of a species on both sides
        {"equation": "QX2 + X + M ⇌ 2 X + QX + M", "collision_efficiency": {"Z": 0.3, "QX": 4.0},
         "forward": {"law": "Arrhenius", "A": 4e14, "Ea": 450.0, "orders": {"X": 0.7}}},
        # fall-off, lumped
        {"equation": "2 QX ⇌ Q2X2", "collision_efficiency": {"X2": 2.0},
         "forward": {"law": "Troe", "k_inf": {"A": 8e9}, "k_0": {"A": 3e14, "n": -1.4}, "F_cent": 0.45,
                     "orders": {"QX": 2.3, "Q2X2": -1.0}}},
        # a pressure table, lumped, in a list with mass action
        {"equation": "QX2 + X ⇌ QX + X2", "forward": [
            {"law": "Arrhenius", "A": 5e12, "n": -0.7, "Ea": 61.0},
            {"law": "pressure table", "orders": {"Z": 1.2}, "rows": [{"p": "0.1 bar", "A": 1e9, "Ea": 50.0},
                                                                      {"p": "5 bar", "A": 3e9, "Ea": 52.0}]},
            {"law": "Arrhenius", "A": -1e11, "n": -0.7, "Ea": 61.0}]},
    ]


def _adsorption() -> list[Document]:
    """Hougen-Watson: with the equation's orders, and with others."""
    return [
        {"equation": "Q + X2 ⇌ QX2", "forward": {
            "law": "Hougen-Watson", "k": {"A": 2e10, "n": 0.1, "Ea": 12.0}, "power": 2,
            "adsorption": [{"species": "X2", "K": {"A": 3e-2, "Ea": -30.0}}, {"species": "Z", "K": {"A": 0.4}, "power": 2},
                           {"species": "QX2", "K": {"A": 0.7, "Ea": -9.0}, "power": 0.5}]}},
        {"equation": "X + Q2X2 ⇌ QX2 + QX", "forward": {
            "law": "Hougen-Watson", "k": {"A": 6e9, "Ea": -3.0}, "orders": {"Q2X2": 0.5}, "stoichiometric_number": 2,
            "power": 1.5, "adsorption": [{"species": "Q2X2", "K": {"A": 2.0, "Ea": -14.0}}]}},
        {"equation": "2 X + M ⇌ X2 + M", "forward": [
            {"law": "Hougen-Watson", "k": {"A": 4e11, "n": -1.0}, "collision_efficiency": {"Z": 0.0, "QX2": 12.0},
             "adsorption": [{"species": "X", "K": {"A": 2.0, "Ea": -14.0}, "power": 0.5}]},
            {"law": "Arrhenius", "A": 2e9}]},
    ]


def lumped_steps() -> Document:
    """The third invented mechanism as a dict with the keys of a mechanism file; units mol/dm3, kJ/mol and bar."""
    document = building_blocks()
    document["mechanism"]["name"] = "lumped steps"
    document["reaction"] = [entry | {"source": "invented"} for entry in deepcopy(_orders() + _adsorption())]
    return document
