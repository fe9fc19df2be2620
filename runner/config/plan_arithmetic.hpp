// [arithmetic] and [filter.arithmetic] of a plan. Inside this room only.
#pragma once

#include <optional>
#include <string_view>

#include "oracle/arithmetic/described.hpp"
#include "oracle/judge/plan.hpp"
#include "runner/config/reader.hpp"

namespace halflsb {

/// A table of arithmetic and what it says.
struct ArithmeticTable {
    std::optional<TableReader> reader;
    ParameterValues values;
    StageArithmetic arithmetic;
};

/// `outer` is the top, or the reader of a [[filter]]. Without the table the defaults hold.
void read_arithmetic(ReadContext& context, TableReader& outer, std::string_view title, const StageArithmetic& defaults,
                     ArithmeticTable& read);

/// One [[filter]] with its tables, for what is found only when all are read.
struct StageTables {
    TableReader reader;
    const Recipe* recipe = nullptr;
    ParameterValues values = {};
    ArithmeticTable own = {};

    /// At the key to blame: the stage's own, else that of its arithmetic, else that of [arithmetic].
    void refuse(const Error& error, ArithmeticTable& common);
};

/// What cannot be of the arithmetic of any channel; the stage counts in `chain`, which holds those of all channels.
std::optional<ArithmeticProblem> arithmetic_problem(const FilterChain& chain, const Signal& signal);

}  // namespace halflsb
