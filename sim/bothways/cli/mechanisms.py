"""bothways mechanisms: what is bundled."""

import argparse
import textwrap

from ..grid import bundled_grids
from ..mechanism import bundled_cases, bundled_mechanisms, read_mechanism
from ..mechanism.files import read_toml
from ..report import counted
from . import DONE, VERBS


def add_to(verbs) -> None:  # type: ignore[no-untyped-def]
    """Adds the verb to the parser."""
    parser = verbs.add_parser("mechanisms", help=VERBS["mechanisms"],
                              description="Lists the bundled mechanisms with phase, size and source, and the bundled "
                              "cases and grids.", epilog="example: bothways mechanisms", allow_abbrev=False)
    parser.set_defaults(act=act)


def act(chosen: argparse.Namespace) -> int:
    """Carries out the verb."""
    for name in bundled_mechanisms():
        m = read_mechanism(name)
        print(f"{name:<22}{m.phase}, {len(m.species)} species, {counted(len(m.reactions), 'reaction')}")
        for source in m.sources:
            print(textwrap.indent(textwrap.fill(source, 90), " " * 22))
    print("\nbundled cases (an invented scenario), for 'bothways run NAME':")
    for name, path in bundled_cases().items():
        print(f"{name:<28}{read_toml(path)['case'].get('title', '')}")
    print("\nbundled grids (invented too), for 'bothways sweep NAME':")
    for name, path in bundled_grids().items():
        print(f"{name:<28}{read_toml(path)['grid'].get('title', '')}")
    return DONE
