#include "runner/record/explanation_json.hpp"

#include "oracle/explain/said_words.hpp"

namespace halflsb {

namespace {

Json change_json(const Change& change, const ExplainedChannels& one) {
    const bool is_of_stage = change.slot == Slot::filter || change.slot == Slot::arithmetic;
    const bool has_place = is_of_stage && change.stage < one.stages.size();
    return {{"slot", name_of(change.slot)},
            {"stage", is_of_stage ? Json(change.stage + 1) : Json(nullptr)},
            {"place", has_place ? Json(to_text(one.stages[change.stage])) : Json(nullptr)},
            {"what", change.what},
            {"look_at", change.look_at},
            {"price_bits", number_json(change.price_bits)}};
}

/// How far a board reproduces the captures: null for the case where nothing differs.
Json fit_json(const CaptureFit& fit, const ExplainedChannels& one) {
    const auto at = static_cast<std::size_t>(fit.wrong_case);
    const bool is_wrong = fit.wrong_case >= 0 && at < one.cases.size();
    return {{"first_wrong_case", is_wrong ? Json(one.cases[at]) : Json(nullptr)},
            {"first_wrong_sample", is_wrong ? Json(fit.wrong_index) : Json(nullptr)}};
}

Json candidate_json(const Candidate& candidate, const ExplainedChannels& one) {
    Json changes = Json::array();
    for (const Change& change : candidate.hypothesis.changes) changes.push_back(change_json(change, one));
    Json json = {{"what", text_json(candidate.hypothesis.what())},
                 {"price_bits", number_json(candidate.hypothesis.price_bits())},
                 {"changes", std::move(changes)}};
    json.update(fit_json(candidate.fit, one));
    return json;
}

Json class_json(const EquivalenceClass& cause, const ExplainedChannels& one) {
    Json members = Json::array();
    for (const Candidate& member : cause.members) members.push_back(candidate_json(member, one));
    return {{"separated_by", text_json(cause.separated_by)}, {"members", std::move(members)}};
}

Json symptoms_json(const Symptoms& seen, const ExplainedChannels& one) {
    const auto at = static_cast<std::size_t>(seen.largest_case);
    const bool has_largest = seen.largest_case >= 0 && at < one.cases.size();
    return {{"samples", seen.samples},
            {"differing", seen.differing},
            {"mean_lsb", number_json(seen.mean_lsb)},
            {"mean_above_lsb", number_json(seen.mean_above_lsb)},
            {"mean_below_lsb", number_json(seen.mean_below_lsb)},
            {"rms_lsb", number_json(seen.rms_lsb)},
            {"largest_lsb", number_json(seen.largest_lsb)},
            {"largest_case", has_largest ? Json(one.cases[at]) : Json(nullptr)},
            {"largest_sample", has_largest ? Json(seen.largest_index) : Json(nullptr)},
            {"lag_samples", seen.lag_samples},
            {"equal_at_lag_percent", number_json(seen.equal_at_lag_percent)},
            {"zero_bits", seen.zero_bits},
            {"declared_zero_bits", seen.declared_zero_bits},
            {"block_samples", seen.block_samples > 0 ? Json(seen.block_samples) : Json(nullptr)},
            {"block_place", seen.block_samples > 0 ? Json(seen.block_place) : Json(nullptr)},
            {"longest_held_samples", seen.longest_held_samples}};
}

Json linear_json(const LinearFit& fit) {
    Json b = Json::array(), a = Json::array();
    for (const double each : fit.b) b.push_back(number_json(each));
    for (const double each : fit.a) a.push_back(number_json(each));
    return {{"b", std::move(b)},
            {"a", std::move(a)},
            {"offset_lsb", number_json(fit.offset_lsb)},
            {"residual_lsb", number_json(fit.residual_lsb)},
            {"samples", fit.samples}};
}

Json stages_json(const FilterChain& chain) {
    Json stages = Json::array();
    for (const FilterStage& stage : chain) stages.push_back(said_words(stage));
    return stages;
}

Json channels_json(const ExplainedChannels& one) {
    const Finding& finding = one.finding;
    const SearchResult& search = finding.search;
    Json classes = Json::array();
    for (const EquivalenceClass& cause : search.classes) classes.push_back(class_json(cause, one));
    const bool has_twin = finding.kind != FindingKind::no_twin;
    return {{"channels", one.channels},
            {"finding", name_of(finding.kind)},
            {"is_inferred", finding.is_inferred},
            {"cases", one.cases},
            {"samples", one.samples},
            {"declared", has_twin ? fit_json(search.declared.fit, one) : Json(nullptr)},
            {"arithmetic", has_twin ? stages_json(search.declared.hypothesis.board.filter) : Json(nullptr)},
            {"causes", std::move(classes)},
            {"nearest", search.nearest ? candidate_json(*search.nearest, one) : Json(nullptr)},
            {"seen", finding.symptoms ? symptoms_json(*finding.symptoms, one) : Json(nullptr)},
            {"linear", finding.linear ? linear_json(*finding.linear) : Json(nullptr)},
            {"tried", search.tried},
            {"was_cut", search.was_cut},
            {"missing", error_json(finding.missing)}};
}

Json asked_json(const AskedRun& run) {
    Json questions = Json::array();
    for (const AskedQuestion& question : run.questions) {
        Json ruled_out = Json::array();
        for (const AskedQuestion::RuledOut& cause : question.ruled_out)
            ruled_out.push_back({{"channels", cause.channels}, {"what", text_json(cause.what)}});
        questions.push_back({{"case", question.case_name},
                             {"stimulus", question.what},
                             {"ruled_out", std::move(ruled_out)},
                             {"left", question.left}});
    }
    return {{"folder", run.folder}, {"questions", std::move(questions)}};
}

}  // namespace

Json explanation_json(const Explanation& explanation) {
    Json channels = Json::array();
    for (const ExplainedChannels& one : explanation.channels) channels.push_back(channels_json(one));
    Json asked = Json::array();
    for (const AskedRun& run : explanation.asked) asked.push_back(asked_json(run));
    return {{"folder", explanation.folder},
            {"plan_file", explanation.plan_file},
            {"left_out", explanation.left_out},
            {"asked", std::move(asked)},
            {"not_asked", text_json(explanation.not_asked)},
            {"channels", std::move(channels)}};
}

}  // namespace halflsb
