#include "runner/config/plan_filters.hpp"

#include <algorithm>
#include <cmath>
#include <deque>

#include "oracle/arithmetic/declared.hpp"
#include "oracle/filters/channel_stages.hpp"
#include "oracle/filters/rates.hpp"
#include "oracle/judge/units.hpp"
#include "runner/config/coefficient_files.hpp"
#include "runner/config/plan_arithmetic.hpp"
#include "runner/config/plan_words.hpp"

namespace halflsb {

namespace {

/// The top of what a plan may say, so that a stage is not blamed for what a missing [signal] leaves open.
constexpr int most_channels = 16;
/// Far more than a firmware has; how long a chain remembers is then found in a moment.
constexpr std::size_t most_stages = 32;

bool is_in_time(const Recipe& recipe, const ParameterValues& values) {
    return std::any_of(recipe.parameters.begin(), recipe.parameters.end(), [&](const Parameter& parameter) {
        return (parameter.unit == "Hz" || parameter.unit == "s") && values.has(parameter.name);
    });
}

class FilterReader {
public:
    FilterReader(ReadContext& context, TableReader& top, const Signal* signal)
        : context_(context), top_(top), signal_(signal) {}

    std::optional<PlanFilters> read() {
        const std::size_t before = context_.problems.count();
        read_arithmetic(context_, top_, "[arithmetic]", {}, common_);
        const bool is_written = top_.entry("filter") != nullptr;
        const std::size_t before_tables = context_.problems.count();
        const auto tables = top_.tables("filter");
        if (tables.size() > most_stages) {
            top_.refuse(tables[most_stages]->place,
                        "the chain has " + std::to_string(tables.size()) + " stages, the most are " +
                            std::to_string(most_stages),
                        "put coefficients of one kind into one stage");
            return std::nullopt;
        }
        for (const TomlValue* table : tables) read_stage(*table, tables.size());
        if (tables.empty() && (!is_written || context_.problems.count() == before_tables)) {
            top_.refuse(top_.place_of("filter"), "the file has no [[filter]]",
                        "say what the firmware computes, at least one stage");
        }
        if (context_.problems.count() == before && signal_ != nullptr) check_arithmetic();
        if (context_.problems.count() != before) return std::nullopt;
        return std::move(read_);
    }

private:
    void read_stage(const TomlValue& table, std::size_t stage_count) {
        StageTables& tables = tables_.emplace_back(StageTables{TableReader(context_, table, "[[filter]]", &top_)});
        TableReader& reader = tables.reader;
        const Recipe* recipe = reader.chosen_recipe("kind", filter_recipes());
        if (recipe == nullptr) return;
        tables.recipe = recipe;
        PlanFilters::Stage stage{std::string(recipe->name), reader.parameters(*recipe), {}, false};
        if (recipe->name == unknown_kind) {
            if (stage_count > 1) {
                reader.refuse(reader.place_of("kind"), "an unknown filter beside other stages",
                              "make it the only [[filter]]: of a chain with an unknown stage nothing is known");
            }
            if (const TomlEntry* arithmetic = reader.entry("arithmetic")) {
                reader.refuse(arithmetic->key_place, "the arithmetic of an unknown filter is stated",
                              "leave it out, or say what the filter is");
            }
            reader.refuse_unknown_keys();
            read_.is_unknown = true;
            return;
        }
        std::optional<CoefficientFiles> files;
        if (reader.is_clean()) files.emplace(context_, reader, *recipe, stage.values);
        read_arithmetic(context_, reader, "[filter.arithmetic]", common_.arithmetic, tables.own);
        reader.refuse_unknown_keys();
        if (!reader.is_clean()) return;
        stage.arithmetic = tables.own.arithmetic;
        if (files && !files->settle(stage.arithmetic, signal_, stage_count == 1)) return;
        tables.values = stage.values;
        stage.depends_on_rate = is_in_time(*recipe, stage.values);
        if (signal_ == nullptr && stage.depends_on_rate) return;
        auto made = make_stage(recipe->name, stage.values,
                               {signal_ == nullptr ? 1.0 : stage_rate_hz(), stage.arithmetic,
                                signal_ == nullptr ? most_channels : signal_->channels});
        if (made) made = checked_words(std::move(*made));
        if (made) {
            read_.chain.push_back(std::move(*made));
            read_.positions.push_back(context_.position_of(table.place));
            read_.stages.push_back(std::move(stage));
        } else {
            tables.refuse(made.error(), common_);
        }
    }

    /// Of words that a stage has from [arithmetic] another one may have use.
    void check_arithmetic() {
        const std::size_t before = context_.problems.count();
        for (std::size_t i = 0; i < read_.chain.size(); ++i) {
            if (const auto error = misplaced_word(read_.chain[i], tables_[i].own.values))
                tables_[i].refuse(*error, common_);
        }
        if (context_.problems.count() != before) return;
        if (const auto problem = arithmetic_problem(read_.chain, *signal_))
            tables_[problem->stage].refuse(problem->error, common_);
    }

    /// Corners of a stage are meant at the rate that the stages before it leave.
    double stage_rate_hz() const {
        double rate_hz = signal_->rate_hz;
        for (const FilterStage& before : read_.chain) rate_hz = output_rate_hz(before, rate_hz);
        return rate_hz;
    }

    /// Words between the stages that count in another kind of value would clip or lose everything.
    Outcome<FilterStage> checked_words(FilterStage stage) const {
        const auto& words = stage.arithmetic.stage_format;
        if (!words || signal_ == nullptr || signal_->output_per_input != 1.0) return stage;
        const ValueKind between = value_kind(*words), around = value_kind(signal_->input);
        if (between == around || between == ValueKind::number || around == ValueKind::number) return stage;
        return Error{
            ErrorKind::input, "stage_format",
            std::string(words->name) + " counts in " + unit_of(between) + ", the signal's " +
                std::string(signal_->input.name) + " in " + unit_of(around) +
                ", so the stage would clip or lose its samples",
            std::string("give a format of ") + (around == ValueKind::codes ? "the i or u" : "the q") + " family"};
    }
    static const char* unit_of(ValueKind kind) { return kind == ValueKind::codes ? "LSB" : "fractions of full scale"; }

    ReadContext& context_;
    TableReader& top_;
    const Signal* signal_;
    ArithmeticTable common_;
    std::deque<StageTables> tables_;
    PlanFilters read_;
};

}  // namespace

bool PlanFilters::depends_on_rate() const {
    return std::any_of(stages.begin(), stages.end(), [](const Stage& stage) { return stage.depends_on_rate; });
}

const Outcome<FilterChain>& PlanFilters::at_rate(double rate_hz, const Signal& signal) const {
    if (const auto known = chains_.find(rate_hz); known != chains_.end()) return known->second;
    FilterChain made;
    double stage_rate_hz = rate_hz;
    for (const Stage& stage : stages) {
        auto at_rate = make_stage(stage.kind, stage.values, {stage_rate_hz, stage.arithmetic, signal.channels});
        if (at_rate) stage_rate_hz = output_rate_hz(*at_rate, stage_rate_hz);
        if (!at_rate) return chains_.emplace(rate_hz, at_rate.error()).first->second;
        made.push_back(std::move(*at_rate));
    }
    if (const auto problem = arithmetic_problem(made, signal))
        return chains_.emplace(rate_hz, problem->error).first->second;
    return chains_.emplace(rate_hz, std::move(made)).first->second;
}

std::optional<std::int64_t> PlanFilters::flush_samples_at(double rate_hz, const Signal& signal) const {
    if (const auto known = flushes_.find(rate_hz); known != flushes_.end()) return known->second;
    std::optional<std::int64_t> most = 0;
    const Outcome<FilterChain>& design = at_rate(rate_hz, signal);
    const double full_scale = full_scale_value(signal.input) * std::fabs(signal.output_per_input);
    const int channels = channels_differ(chain) ? signal.channels : 1;
    for (int channel = 1; design && most && channel <= channels; ++channel) {
        const FilterChain own = chain_of_channel(*design, channel);
        // The board runs the rounded coefficients, whose poles may be the slower ones.
        for (const FilterChain& run : {own, declared_chain(own)}) {
            const auto samples = flush_samples(run, full_scale, finest_step(signal.output) / 2.0);
            most = samples && most ? std::optional(std::max(*most, *samples)) : std::nullopt;
        }
    }
    return flushes_.emplace(rate_hz, most).first->second;
}

std::optional<PlanFilters> read_filters(ReadContext& context, TableReader& top, const Signal* signal) {
    return FilterReader(context, top, signal).read();
}

}  // namespace halflsb
