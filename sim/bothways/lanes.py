"""Eight numbers at a time: vector operations where the compiler's own vectorising falls short.

A loop that the compiler vectorises does whole groups of sixteen and what is left one by one, which takes most of the time
where rows are short. Here rows are padded to whole eights and every operation is one of eight. Where the machine has a
fused multiply-add it is used: one rounding instead of two.
"""

from typing import Any

import numba
from llvmlite import binding, ir
from numba.core import cgutils, types
from numba.extending import intrinsic

from .compiled import JIT, compiled

WIDTH = 8
_NUMBERS = ir.VectorType(ir.DoubleType(), WIDTH)


@compiled
def padded(size):
    """The next odd number of eights: rows of a power of two would all want the same places in the cache."""
    return 16 * (size + 7 >> 4) + 8 if size > 0 else 0


def _fused() -> bool:
    """Whether a multiply-add is one instruction here; elsewhere it would be a slow call."""
    if any(getattr(numba.config, name, None) for name in ("CPU_NAME", "CPU_FEATURES")):
        return False  # compiled for another machine
    features = binding.get_host_cpu_features()
    return bool(features.get("fma")) or "aarch64" in binding.get_process_triple()


FUSED = _fused()


def _place(context: Any, builder: Any, kind: Any, array: Any, index: Any, index_kind: Any) -> Any:
    base = context.make_array(kind)(context, builder, array).data
    offset = context.cast(builder, index, index_kind, types.intp)
    return builder.bitcast(builder.gep(base, [offset]), _NUMBERS.as_pointer())


def _load(builder: Any, place: Any) -> Any:
    return builder.load(place, align=8)


def _store(builder: Any, value: Any, place: Any) -> None:
    builder.store(value, place, align=8)


def _all(builder: Any, value: Any) -> Any:
    """A number in every place."""
    none = ir.Constant(_NUMBERS, ir.Undefined)
    first = builder.insert_element(none, value, ir.Constant(ir.IntType(32), 0))
    return builder.shuffle_vector(first, none, ir.Constant(ir.VectorType(ir.IntType(32), WIDTH), [0] * WIDTH))


def _call(builder: Any, name: str, *values: Any) -> Any:
    kind = ir.FunctionType(_NUMBERS, [_NUMBERS] * len(values))
    return builder.call(cgutils.get_or_insert_function(builder.module, kind, f"llvm.{name}.v{WIDTH}f64"), values)


def _less_product(builder: Any, x: Any, a: Any, b: Any) -> Any:
    """x - a b."""
    if not FUSED:
        return builder.fsub(x, builder.fmul(a, b))
    return _call(builder, "fma", builder.fneg(a), b, x)


def _total(builder: Any, value: Any) -> Any:
    """The sum of all places, by halves."""
    half = WIDTH
    while half > 1:
        half //= 2
        mask = [(m + half) % WIDTH for m in range(WIDTH)]
        turned = builder.shuffle_vector(value, value, ir.Constant(ir.VectorType(ir.IntType(32), WIDTH), mask))
        value = builder.fadd(value, turned)
    return builder.extract_element(value, ir.Constant(ir.IntType(32), 0))


@intrinsic
def _multiply_add(typing_context, a, b, c):  # type: ignore[no-untyped-def]
    def generate(context, builder, signature, arguments):  # type: ignore[no-untyped-def]
        a, b, c = arguments
        return builder.fma(a, b, c) if FUSED else builder.fadd(builder.fmul(a, b), c)

    return types.float64(types.float64, types.float64, types.float64), generate


@intrinsic
def _take(typing_context, x, i, a, u, j):  # type: ignore[no-untyped-def]
    def generate(context, builder, signature, arguments):  # type: ignore[no-untyped-def]
        kinds = signature.args
        place = _place(context, builder, kinds[0], arguments[0], arguments[1], kinds[1])
        other = _load(builder, _place(context, builder, kinds[3], arguments[3], arguments[4], kinds[4]))
        _store(builder, _less_product(builder, _load(builder, place), _all(builder, arguments[2]), other), place)
        return context.get_dummy_value()

    return types.none(x, i, types.float64, u, j), generate


@intrinsic
def _take_four(typing_context, x, i, a, b, c, d, u, j, wide):  # type: ignore[no-untyped-def]
    def generate(context, builder, signature, arguments):  # type: ignore[no-untyped-def]
        kinds = signature.args
        place = _place(context, builder, kinds[0], arguments[0], arguments[1], kinds[1])
        value = _load(builder, place)
        first = _place(context, builder, kinds[6], arguments[6], arguments[7], kinds[7])
        width = builder.udiv(context.cast(builder, arguments[8], kinds[8], types.intp), ir.Constant(ir.IntType(64), WIDTH))
        for row, factor in enumerate(range(2, 6)):
            other = _load(builder, builder.gep(first, [builder.mul(width, ir.Constant(ir.IntType(64), row))]))
            value = _less_product(builder, value, _all(builder, arguments[factor]), other)
        _store(builder, value, place)
        return context.get_dummy_value()

    number = types.float64
    return types.none(x, i, number, number, number, number, u, j, wide), generate


@intrinsic
def _take_two(typing_context, x, i, a, b, u, j, k):  # type: ignore[no-untyped-def]
    def generate(context, builder, signature, arguments):  # type: ignore[no-untyped-def]
        kinds = signature.args
        place = _place(context, builder, kinds[0], arguments[0], arguments[1], kinds[1])
        value = _load(builder, place)
        for factor, where in ((2, 5), (3, 6)):
            other = _load(builder, _place(context, builder, kinds[4], arguments[4], arguments[where], kinds[where]))
            value = _less_product(builder, value, _all(builder, arguments[factor]), other)
        _store(builder, value, place)
        return context.get_dummy_value()

    return types.none(x, i, types.float64, types.float64, u, j, k), generate


@intrinsic
def _widen(typing_context, x, i, u, j, k):  # type: ignore[no-untyped-def]
    def generate(context, builder, signature, arguments):  # type: ignore[no-untyped-def]
        kinds = signature.args
        place = _place(context, builder, kinds[0], arguments[0], arguments[1], kinds[1])
        one, two = (_load(builder, _place(context, builder, kinds[2], arguments[2], arguments[m], kinds[m])) for m in (3, 4))
        size = _call(builder, "fabs", builder.fmul(one, two))
        value = _load(builder, place)
        larger = builder.fcmp_ordered(">", size, value)
        _store(builder, builder.select(larger, size, value), place)
        return context.get_dummy_value()

    return types.none(x, i, u, j, k), generate


@intrinsic
def _product(typing_context, x, i, u, j, eights):  # type: ignore[no-untyped-def]
    def generate(context, builder, signature, arguments):  # type: ignore[no-untyped-def]
        kinds = signature.args
        one, two = (_place(context, builder, kinds[m], arguments[m], arguments[m + 1], kinds[m + 1]) for m in (0, 2))
        sums = cgutils.alloca_once_value(builder, ir.Constant(_NUMBERS, [0.0] * WIDTH))
        with cgutils.for_range(builder, context.cast(builder, arguments[4], kinds[4], types.intp)) as loop:
            a, b = (_load(builder, builder.gep(place, [loop.index])) for place in (one, two))
            builder.store(_less_product(builder, builder.load(sums), builder.fneg(a), b), sums)
        return _total(builder, builder.load(sums))

    return types.float64(x, i, u, j, eights), generate


def _list_of(eights: int) -> Any:
    @intrinsic
    def take_list(typing_context, x, i, factors, rows, wide, j):  # type: ignore[no-untyped-def]
        def generate(context, builder, signature, arguments):  # type: ignore[no-untyped-def]
            kinds = signature.args
            place = _place(context, builder, kinds[0], arguments[0], arguments[1], kinds[1])
            base = _place(context, builder, kinds[0], arguments[0], arguments[5], kinds[5])
            steps = [ir.Constant(ir.IntType(64), m) for m in range(eights)]
            sums = [cgutils.alloca_once_value(builder, _load(builder, builder.gep(place, [step]))) for step in steps]
            lists = [context.make_array(kind)(context, builder, array) for kind, array in zip(kinds[2:4], arguments[2:4],
                                                                                              strict=True)]
            count = builder.extract_value(lists[1].shape, 0)
            width = builder.udiv(context.cast(builder, arguments[4], kinds[4], types.intp), ir.Constant(ir.IntType(64), WIDTH))
            with cgutils.for_range(builder, count) as loop:
                factor = _all(builder, builder.load(builder.gep(lists[0].data, [loop.index])))
                row = context.cast(builder, builder.load(builder.gep(lists[1].data, [loop.index])), kinds[3].dtype, types.intp)
                start = builder.gep(base, [builder.mul(row, width)])
                for step, total in zip(steps, sums, strict=True):
                    other = _load(builder, builder.gep(start, [step]))
                    builder.store(_less_product(builder, builder.load(total), factor, other), total)
            for step, total in zip(steps, sums, strict=True):
                _store(builder, builder.load(total), builder.gep(place, [step]))
            return context.get_dummy_value()

        return types.none(x, i, factors, rows, wide, j), generate

    return take_list


_take_list, _take_list_of_two = _list_of(1), _list_of(2)


multiply_add: Any
take: Any
take_two: Any
take_four: Any
take_list: Any
take_list_of_two: Any
widen: Any
product: Any
if JIT:
    multiply_add, take, take_two, widen, product = _multiply_add, _take, _take_two, _widen, _product
    take_four, take_list, take_list_of_two = _take_four, _take_list, _take_list_of_two
else:
    def multiply_add(a, b, c):  # type: ignore[no-untyped-def]
        """a b + c."""
        return a * b + c

    def take(x, i, a, u, j):  # type: ignore[no-untyped-def]
        """x[i:] -= a u[j:], eight of each."""
        x[i : i + WIDTH] -= a * u[j : j + WIDTH]

    def take_two(x, i, a, b, u, j, k):  # type: ignore[no-untyped-def]
        """x[i:] -= a u[j:] + b u[k:], eight of each."""
        x[i : i + WIDTH] = (x[i : i + WIDTH] - a * u[j : j + WIDTH]) - b * u[k : k + WIDTH]

    def take_four(x, i, a, b, c, d, u, j, wide):  # type: ignore[no-untyped-def]
        """x[i:] -= a u[j:] + b u[j + wide:] + c u[j + 2 wide:] + d u[j + 3 wide:], eight of each."""
        take_two(x, i, a, b, u, j, j + wide)
        take_two(x, i, c, d, u, j + 2 * wide, j + 3 * wide)

    def take_list(x, i, factors, rows, wide, j):  # type: ignore[no-untyped-def]
        """x[i:] -= Σ factors x[rows·wide + j:], eight of each; rows: their numbers."""
        for factor, row in zip(factors, rows, strict=False):
            take(x, i, factor, x, int(row) * wide + j)

    def take_list_of_two(x, i, factors, rows, wide, j):  # type: ignore[no-untyped-def]
        """The same of sixteen."""
        take_list(x, i, factors, rows, wide, j)
        take_list(x, i + WIDTH, factors, rows, wide, j + WIDTH)

    def product(x, i, u, j, eights):  # type: ignore[no-untyped-def]
        """Σ x[i:] u[j:] over so many eights."""
        return float(x[i : i + WIDTH * eights] @ u[j : j + WIDTH * eights])

    def widen(x, i, u, j, k):  # type: ignore[no-untyped-def]
        """x[i:] = max(x[i:], |u[j:] u[k:]|), eight of each."""
        x[i : i + WIDTH] = [max(a, abs(b)) for a, b in zip(x[i : i + WIDTH], u[j : j + WIDTH] * u[k : k + WIDTH], strict=True)]
