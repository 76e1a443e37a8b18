"""An invented solution with everything that can matter: changes of the amount, long sides, ions, a negative heat capacity.

No such substances exist. `Plain` states its equations anew, in extended precision, from the definitions.
"""

import numpy as np

R = np.longdouble("8.31446261815324")
STATES = ("1 mol/L", "mole fraction")
T0 = 298.15
SPECIES = {  # formula, charge, H [J/mol], S [J/(mol K)], cp [J/(mol K)]
    "A": ("Q2X", 0, -2.0e4, 165.0, 90.0), "B": ("Q", 0, 5.0e3, 70.0, 30.0), "C": ("QX", 0, -3.1e4, 95.0, 60.0),
    "D": ("Q4X2", 0, -4.8e4, 330.0, 190.0), "X+": ("X", 1, 4.0e3, 20.0, -40.0), "Q-": ("Q", -1, -3.0e4, 30.0, -70.0),
    "W": ("Z", 0, -2.8e5, 70.0, 75.3)}
REACTIONS = [("A ⇌ B + C", 3.0e6, 5.0e4), ("C ⇌ X+ + Q-", 2.0e5, 4.0e4), ("2 A ⇌ D", 4.0e-2, 3.0e4),
             ("A + W ⇌ B + C + W", 5.0, 3.0e4), ("5 B + C ⇌ A + 4 B", 1e-9, 1.0e4),
             ("D ⇌ 2 B + 2 Q- + 2 X+", 1.0e3, 4.0e4)]


def document(state="1 mol/L"):
    """The solution's mechanism, SI."""
    species = {name: {"formula": formula, "charge": charge,
                      "potential": {"form": "constant heat capacity", "at": T0, "H": H, "S": S, "cp": cp}}
               for name, (formula, charge, H, S, cp) in SPECIES.items()}
    return {"mechanism": {"name": "invented solution", "phase": "ideal solution", "standard_state": state},
            "elements": {"Q": 0.010, "X": 0.020, "Z": 0.018}, "species": species,
            "reaction": [{"equation": equation, "forward": {"law": "Arrhenius", "A": A, "Ea": Ea}}
                         for equation, A, Ea in REACTIONS]}


class Plain:
    """dy/dt of the solution at constant volume, y = (c, T) [mol/m3, K]; own: inert heat capacity [J/(m3 K)]."""

    def __init__(self, state, heat, own=0.0):
        self.state, self.heat, self.own = state, heat, np.longdouble(own)
        self.H, self.S, self.cp = (np.array([row[k] for row in SPECIES.values()], dtype=np.longdouble) for k in (2, 3, 4))

    def sides(self, equation):
        names, sides = list(SPECIES), []
        for text in equation.split(" ⇌ "):
            side = np.zeros(len(names), dtype=int)
            for term in text.split(" + "):
                count, name = term.split(" ") if " " in term else ("1", term)
                side[names.index(name)] += int(count)
            sides.append(side)
        return sides

    def rates(self, c, T):
        """Forward and reverse rates: k Πc, and k/K times Π over the products, in powers of 1 mol/L or of Σc."""
        h, s = self.H + self.cp * (T - T0), self.S + self.cp * np.log(T / np.longdouble(T0))
        unit = np.longdouble(1000.0) if self.state == "1 mol/L" else np.sum(c)
        pairs = []
        for equation, A, Ea in REACTIONS:
            left, right = self.sides(equation)
            k, nu = A * np.exp(-np.longdouble(Ea) / (R * T)), right - left
            K = np.exp(-(nu @ (h - T * s)) / (R * T)) * unit ** int(np.sum(nu))
            pairs.append((k * np.prod(c**left), k / K * np.prod(c**right)))
        return np.array(pairs).T

    def f(self, y):
        y = np.asarray(y, dtype=np.longdouble)
        c, T = y[:-1], y[-1]
        nu = np.array([right - left for left, right in (self.sides(e) for e, _, _ in REACTIONS)]).T
        forward, reverse = self.rates(c, T)
        made = nu @ (forward - reverse)
        h = self.H + self.cp * (T - T0)
        heating = -(h @ made) / (c @ self.cp + self.own) if self.heat == "adiabatic" else np.longdouble(0)
        return np.append(made, heating)

    def J(self, y):
        """Central differences of eighth order in extended precision."""
        weights = {1: 4 / 5, 2: -1 / 5, 3: 4 / 105, 4: -1 / 280}
        columns = []
        for k in range(len(y)):
            step = np.zeros(len(y), dtype=np.longdouble)
            step[k] = np.longdouble(1e-4) * y[k]
            columns.append(sum(np.longdouble(w) * (self.f(y + m * step) - self.f(y - m * step))
                               for m, w in weights.items()) / step[k])
        return np.array(columns).T
