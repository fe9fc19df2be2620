#include "runner/record/comparison_json.hpp"

#include "runner/record/explanation_json.hpp"

namespace halflsb {
namespace {

Json run_json(const ComparedRun& run) {
    return {{"folder", run.folder},
            {"plan_file", run.plan_file},
            {"started_utc", run.started_utc},
            {"build_id", text_json(run.build_id)}};
}

Json channel_json(const ComparedChannel& one) {
    const bool differs = one.different > 0;
    const auto number = [&](double value) { return differs ? number_json(value) : Json(nullptr); };
    return {{"channel", one.channel},
            {"different", one.different},
            {"first_index", differs ? Json(one.first_index) : Json(nullptr)},
            {"before", number(one.before)},
            {"after", number(one.after)},
            {"mean", number(one.mean)},
            {"rms", number(one.rms)},
            {"largest", number(one.largest)},
            {"largest_index", one.largest_index >= 0 ? Json(one.largest_index) : Json(nullptr)}};
}

Json case_json(const ComparedCase& one) {
    Json channels = Json::array();
    for (const ComparedChannel& channel : one.channels) channels.push_back(channel_json(channel));
    return {{"name", one.name},
            {"samples", one.samples},
            {"samples_before", one.samples_before},
            {"samples_after", one.samples_after},
            {"channels", std::move(channels)}};
}

}  // namespace

Json comparison_json(const Comparison& comparison) {
    Json cases = Json::array();
    for (const ComparedCase& one : comparison.cases) cases.push_back(case_json(one));
    const auto explained = [](const std::optional<Explanation>& one) {
        return one ? explanation_json(*one) : Json(nullptr);
    };
    return {{"before", run_json(comparison.before)},
            {"after", run_json(comparison.after)},
            {"differs", comparison.differs()},
            {"unit", comparison.has_lsb ? "lsb" : "value"},
            {"left_out", comparison.left_out},
            {"cases", std::move(cases)},
            {"board_before", explained(comparison.board_before)},
            {"change", explained(comparison.change)},
            {"not_explained", comparison.not_explained}};
}

}  // namespace halflsb
