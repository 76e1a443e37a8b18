"""Tables of Rosenbrock methods in the transformed form: stages (1/(hγ) - J) U_i = f(y + Σ a_ij U_j) + Σ c_ij U_j/h.

y₁ = y + Σ m_j U_j, error estimate Σ e_j U_j. The tables check themselves when built (stiffly accurate: the last rows
of a agree with m).
"""

from dataclasses import dataclass

import numpy as np


@dataclass(frozen=True)
class RosenbrockTable:
    """gamma; a, c: rows of growing length; m, e: (s); h: dense output rows; order, and order of the estimator."""

    name: str
    source: str
    order: int
    estimator_order: int
    gamma: float
    a: tuple[tuple[float, ...], ...]
    c: tuple[tuple[float, ...], ...]
    m: tuple[float, ...]
    e: tuple[float, ...]
    h: tuple[tuple[float, ...], ...]

    def __post_init__(self) -> None:
        stages = len(self.m)
        if not (len(self.a) == len(self.c) == len(self.e) == stages and self.a[-1] == self.m[:-1]):
            raise ValueError(f"the table {self.name} does not fit together")

    def packed(self) -> np.ndarray:
        """a, c, m and e as one array (4, s, s) for the compiled step."""
        s = len(self.m)
        table = np.zeros((4, s, s))
        for k, rows in enumerate((self.a, self.c)):
            for i, row in enumerate(rows):
                table[k, i, : len(row)] = row
        table[2, 0], table[3, 0] = self.m, self.e
        return table


RODAS5P = RosenbrockTable(
    name="Rodas5P",
    source="G. Steinebach, BIT Numer. Math. 63 (2023) 27, doi:10.1007/s10543-023-00967-x",
    order=5,
    estimator_order=4,
    gamma=0.21193756319429014,
    a=(
        (),
        (3.0,),
        (2.849394379747939, 0.45842242204463923),
        (-6.954028509809101, 2.489845061869568, -10.358996098473584),
        (2.8029986275628964, 0.5072464736228206, -0.3988312541770524, -0.04721187230404641),
        (-7.502846399306121, 2.561846144803919, -11.627539656261098, -0.18268767659942256, 0.030198172008377946),
        (-7.502846399306121, 2.561846144803919, -11.627539656261098, -0.18268767659942256, 0.030198172008377946, 1.0),
        (-7.502846399306121, 2.561846144803919, -11.627539656261098, -0.18268767659942256, 0.030198172008377946, 1.0,
         1.0),
    ),
    c=(
        (),
        (-14.155112264123755,),
        (-17.97296035885952, -2.859693295451294),
        (147.12150275711716, -1.41221402718213, 71.68940251302358),
        (165.43517024871676, -0.4592823456491126, 42.90938336958603, -5.961986721573306),
        (24.854864614690072, -3.0009227002832186, 47.4931110020768, 5.5814197821558125, -0.6610691825249471),
        (30.91273214028599, -3.1208243349937974, 77.79954646070892, 34.28646028294783, -19.097331116725623,
         -28.087943162872662),
        (37.80277123390563, -3.2571969029072276, 112.26918849496327, 66.9347231244047, -40.06618937091002,
         -54.66780262877968, -9.48861652309627),
    ),
    m=(-7.502846399306121, 2.561846144803919, -11.627539656261098, -0.18268767659942256, 0.030198172008377946, 1.0,
       1.0, 1.0),
    e=(0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 1.0),
    h=(
        (25.948786856663858, -2.5579724845846235, 10.433815404888879, -2.3679251022685204, 0.524948541321073,
         1.1241088310450404, 0.4272876194431874, -0.17202221070155493),
        (-9.91568850695171, -0.9689944594115154, 3.0438037242978453, -24.495224566215796, 20.176138334709044,
         15.98066361424651, -6.789040303419874, -6.710236069923372),
        (11.419903575922262, 2.8879645146136994, 72.92137995996029, 80.12511834622643, -52.072871366152654,
         -59.78993625266729, -0.15582684282751913, 4.883087185713722),
    ),
)
"""Eight stages, order 5, A-stable and stiffly accurate, its estimator too; dense output of order 4."""
