#include "runner/config/plan_arithmetic.hpp"

#include <algorithm>

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
    const bool is_alike =
        std::all_of(chain.begin(), chain.end(), [](const FilterStage& s) { return s.channels.empty(); });
    for (int channel = 1; channel <= (is_alike ? 1 : signal.channels); ++channel) {
        std::vector<std::size_t> passed;
        for (std::size_t i = 0; i < chain.size(); ++i) {
            const auto& list = chain[i].channels;
            if (list.empty() || std::find(list.begin(), list.end(), channel) != list.end()) passed.push_back(i);
        }
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
