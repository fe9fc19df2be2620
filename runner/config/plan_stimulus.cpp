// [case.stimulus] of a plan.
#include "runner/config/nested_stimuli.hpp"
#include "runner/config/plan_reader.hpp"
#include "runner/config/plan_words.hpp"

namespace halflsb {

namespace {

std::optional<int> read_channel(TableReader& reader, const Signal* signal) {
    const Recipe& recipe = case_stimulus_recipe();
    const auto channel = reader.parameters(recipe).integer(recipe, "channel");
    if (!channel) return std::nullopt;
    if (signal != nullptr && *channel > signal->channels) {
        const std::string most = std::to_string(signal->channels);
        reader.refuse(reader.place_of("channel"),
                      "channel = " + std::to_string(*channel) + ", but [signal] has " +
                          (signal->channels == 1 ? "1 channel" : most + " channels"),
                      signal->channels == 1 ? "leave it out, or say channels in [signal]"
                                            : "give 1 to " + most + ", or leave it out: then every channel is driven");
    }
    return static_cast<int>(*channel);
}

}  // namespace

std::optional<ReadStimulus> read_stimulus(ReadContext& context, const TomlValue& table, const TableReader& outer,
                                          const Signal* signal, double rate_hz, std::optional<std::uint64_t> seed) {
    TableReader reader(context, table, "[case.stimulus]", &outer);
    const Recipe* recipe = reader.chosen_recipe("shape", stimulus_recipes());
    if (recipe == nullptr) return std::nullopt;
    ReadStimulus read{std::string(recipe->name), reader.parameters(*recipe), read_channel(reader, signal), nullptr};
    reader.refuse_unknown_keys();
    if (!reader.is_clean() || signal == nullptr) return std::nullopt;
    if (seed) set_seeds(*recipe, read.values, *seed);
    StimulusContext made_for{rate_hz, signal->input};
    made_for.full_scale_unit = signal->input_full_scale_unit;
    auto stimulus = make_stimulus(recipe->name, read.values, made_for);
    if (!stimulus) {
        reader.refuse(stimulus.error());
        return std::nullopt;
    }
    read.stimulus = std::move(*stimulus);
    return read;
}

}  // namespace halflsb
