#include "runner/config/plan_arithmetic.hpp"

#include "oracle/filters/channel_stages.hpp"

namespace halflsb {

void read_arithmetic(ReadContext& context, TableReader& outer, std::string_view title, const StageArithmetic& defaults,
                     ArithmeticTable& read) {
    read.arithmetic = defaults;
    const TomlValue* table = outer.table("arithmetic", false);
    if (table == nullptr) return;
    read.reader.emplace(context, *table, std::string(title), &outer);
    read.values = read.reader->parameters(arithmetic_recipe());
    read.reader->refuse_unknown_keys();
    if (!read.reader->is_clean()) return;
    auto made = make_arithmetic(read.values, defaults);
    if (made) {
        read.arithmetic = *made;
    } else {
        read.reader->refuse(made.error());
    }
}

void StageTables::refuse(const Error& error, ArithmeticTable& common) {
    const bool is_of_arithmetic = find_parameter(arithmetic_recipe(), error.place) != nullptr &&
                                  !(find_parameter(*recipe, error.place) != nullptr && values.has(error.place));
    if (is_of_arithmetic && own.reader && own.values.has(error.place)) {
        own.reader->refuse(error);
    } else if (is_of_arithmetic && common.reader && common.values.has(error.place)) {
        common.reader->refuse(error);
    } else {
        reader.refuse(error);
    }
}

std::optional<ArithmeticProblem> arithmetic_problem(const FilterChain& chain, const Signal& signal) {
    for (int channel = 1; channel <= (channels_differ(chain) ? signal.channels : 1); ++channel) {
        const std::vector<std::size_t> passed = stages_of_channel(chain, channel);
        if (passed.empty()) continue;
        auto found =
            describe(chain_of_channel(chain, channel), signal.input, signal.output, signal.output_per_input).problem;
        if (!found) continue;
        found->stage = passed[found->stage];
        return found;
    }
    return std::nullopt;
}

}  // namespace halflsb
