#include "runner/record/run_json.hpp"

#include <variant>

#include "runner/record/json_parts.hpp"
#include "runner/record/json_text.hpp"
#include "runner/record/run_document.hpp"

namespace halflsb {

namespace {

Json count(std::optional<std::uint32_t> value) { return value ? Json(*value) : Json(nullptr); }

Json board_json(const BoardFacts& board) {
    return {{"rig_name", text_json(board.rig_name)},
            {"link", text_json(board.link)},
            {"serial", text_json(board.serial)},
            {"build_id", text_json(board.build_id)},
            {"filter", text_json(board.filter)},
            {"injection", text_json(board.injection)},
            {"channels", board.channels},
            {"block_samples", board.block_samples},
            {"credit_blocks", board.credit_blocks},
            {"tick_hz", board.tick_hz},
            {"tick_bits", board.tick_bits}};
}

Json firmware_json(const FirmwareCheck& firmware) {
    return {{"verified", firmware.state == FirmwareCheck::State::agrees},
            {"image_file", text_json(firmware.image_file)},
            {"image_build_id", text_json(firmware.image_build_id)},
            {"before_run_skipped", firmware.before_run_skipped}};
}

Json figure_json(const JudgedFigure& figure) {
    Json json = {{"name", figure.name},
                 {"value", number_json(figure.value)},
                 {"uncertainty", number_json(figure.uncertainty)},
                 {"limit", number_json(figure.limit)},
                 {"margin", number_json(figure.margin)},
                 {"unit", text_json(figure.unit)},
                 {"at_least", figure.at_least},
                 {"verdict", name_of(figure.verdict)},
                 {"note", text_json(figure.note)}};
    // The judge's word for a response without any error: then no ratio to the error exists.
    if (!figure.value && figure.passed() && figure.note == "identical") json["identical"] = true;
    return json;
}

Json neighbourhood_json(const std::optional<Neighbourhood>& around, const Signal& signal) {
    if (!around) return nullptr;
    Json reference = Json::array();
    for (const double value : around->reference) reference.push_back(number_json(value));
    Json json = {{"index_samples", around->index},
                 {"first_index_samples", around->first_index},
                 {"stimulus_codes", around->stimulus},
                 {"response_codes", around->response}};
    json[signal.output.has_lsb() ? "reference_lsb" : "reference_value"] = std::move(reference);
    return json;
}

Json evidence_json(const std::optional<Evidence>& evidence) {
    if (!evidence) return nullptr;
    return {{"samples", evidence->samples},
            {"budget_samples", evidence->budget_samples},
            {"fixed_length_samples", number_json(evidence->fixed_length_samples)}};
}

Json rule_json(const RuleVerdict& verdict, const Signal& signal) {
    const auto* latency = std::get_if<LatencyRule>(&verdict.rule.kind);
    Json figures = Json::array();
    for (const JudgedFigure& figure : verdict.figures) figures.push_back(figure_json(figure));
    const PlanPosition& at = verdict.rule.position;
    return {{"kind", kind_name(verdict.rule)},
            {"implicit", latency != nullptr && latency->implicit},
            {"reference", text_json(verdict.reference)},
            {"position", {{"file", text_json(at.file)}, {"line", at.line}, {"column", at.column}}},
            {"verdict", name_of(verdict.verdict)},
            {"reason", text_json(verdict.reason)},
            {"channel", verdict.channel > 0 ? Json(verdict.channel) : Json(nullptr)},
            {"figures", std::move(figures)},
            {"evidence", evidence_json(verdict.evidence)},
            {"first_bad", neighbourhood_json(verdict.first_bad, signal)}};
}

Json spread_json(const std::optional<Spread>& spread) {
    if (!spread) return nullptr;
    return {{"median", number_json(spread->median)},
            {"percentile_99", number_json(spread->percentile_99)},
            {"largest", number_json(spread->largest)}};
}

Json stream_json(const StreamFacts& stream) {
    return {{"sent_samples", stream.samples_sent},
            {"received_samples", stream.samples_received},
            {"to_board_bytes", stream.bytes_to_board},
            {"to_host_bytes", stream.bytes_to_host},
            {"bad_frames_at_host", stream.frames_bad_at_host},
            {"bad_frames_at_board", count(stream.frames_bad_at_board)},
            {"lost_at_board_bytes", count(stream.bytes_lost_at_board)},
            {"gaps_at_board", count(stream.gaps_at_board)},
            {"resends", stream.resends},
            {"streaming_s", number_json(stream.streaming_s)},
            {"line_use_ratio", number_json(stream.line_use_ratio)},
            {"total_ticks", stream.ticks_total},
            {"largest_ticks_per_sample", stream.ticks_largest},
            {"ticks_per_sample", spread_json(stream.ticks_per_sample)},
            {"round_trip_s", spread_json(stream.round_trip_s)}};
}

/// What a rule came to; everything here follows from plan and captures.
Json case_verdict_json(const CaseResult& result, const Signal& signal) {
    Json rules = Json::array();
    for (const RuleVerdict& rule : result.rules) rules.push_back(rule_json(rule, signal));
    return {{"number", result.number},
            {"name", result.name},
            {"verdict", name_of(result.verdict)},
            {"grade", name_of(result.grade)},
            {"invalid", error_json(result.invalid)},
            {"latency_told", result.latency_told},
            {"rules", std::move(rules)}};
}

Json capture_json(const std::string& file, const std::string& sha256) {
    if (file.empty()) return nullptr;
    return {{"file", file}, {"sha256", text_json(sha256)}};
}

Json attempt_json(const AttemptResult& attempt) {
    return {{"invalid", error_json(attempt.invalid)},
            {"stream", stream_json(attempt.stream)},
            {"started_utc", text_json(attempt.started_utc)},
            {"elapsed_s", number_json(attempt.elapsed_s)},
            {"capture", capture_json(attempt.capture_file, attempt.capture_sha256)}};
}

/// The texts for people follow from the rest.
Json companion_json(const std::optional<Companion>& companion) {
    if (!companion) return nullptr;
    Json terms = Json::array();
    for (const CompanionTerm& term : companion->terms)
        terms.push_back({{"gain", term.gain}, {"delay_samples", term.delay_samples}});
    return {{"base", text_json(companion->base)},
            {"terms", std::move(terms)},
            {"block_samples", companion->block_samples > 0 ? Json(companion->block_samples) : Json(nullptr)}};
}

/// How a case was captured.
Json case_json(const CaseResult& result) {
    const StimulusFacts& stimulus = result.stimulus;
    Json settings = Json::object(), attempts = Json::array();
    for (const CaseSetting& setting : result.settings) settings[setting.name] = setting.value;
    for (const AttemptResult& attempt : result.attempts) attempts.push_back(attempt_json(attempt));
    return {{"number", result.number},
            {"name", result.name},
            {"stimulus",
             {{"shape", text_json(stimulus.shape)},
              {"recipe", recipe_json(stimulus.values)},
              {"samples", stimulus.samples},
              {"sha256", text_json(stimulus.sha256)},
              {"file", text_json(stimulus.file)}}},
            {"rate_hz", number_json(result.rate_hz)},
            {"start", name_of(result.start)},
            {"start_samples", result.start_samples},
            {"companion", companion_json(result.companion)},
            {"settings", std::move(settings)},
            {"stream", stream_json(result.stream)},
            {"started_utc", text_json(result.started_utc)},
            {"elapsed_s", number_json(result.elapsed_s)},
            {"capture", capture_json(result.capture_file, result.capture_sha256)},
            {"ticks", capture_json(result.ticks_file, result.ticks_sha256)},
            {"attempts", std::move(attempts)},
            {"rerun", text_json(result.rerun)}};
}

constexpr std::size_t verdict_level = 1, verdict_case_level = 3;

/// The verdict section around its cases, which were rendered before.
std::string verdict_frame(const RunResult& run, const std::vector<std::string>& cases) {
    const Counts counts = run.counts();
    const Json frame = {{"title", text_json(run.title)},
                        {"signal", signal_json(run.signal)},
                        {"latency_verified", run.latency_verified()},
                        {"counts",
                         {{"pass", counts.pass},
                          {"fail", counts.fail},
                          {"invalid", counts.invalid},
                          {"undecided", counts.undecided},
                          {"not_run", counts.not_run}}},
                        {"cases", Json::array()}};
    std::string text = json_value_text(frame, verdict_level);
    fill_last_array(text, "\n  }", cases, verdict_case_level);
    return text;
}

std::string case_verdict_text(const RunResult& run, std::size_t index) {
    return json_value_text(case_verdict_json(run.cases[index], run.signal), verdict_case_level);
}

}  // namespace

std::string verdict_text(const RunResult& run) {
    std::vector<std::string> cases;
    for (std::size_t index = 0; index < run.cases.size(); ++index) cases.push_back(case_verdict_text(run, index));
    return verdict_frame(run, cases);
}

std::string run_json(const RunResult& run, bool finished) { return GrowingRunJson().document(run, finished); }

std::string GrowingRunJson::document(const RunResult& run, bool finished) {
    while (case_texts_.size() < run.cases.size()) {
        const std::size_t index = case_texts_.size();
        verdict_texts_.push_back(case_verdict_text(run, index));
        case_texts_.push_back(json_value_text(case_json(run.cases[index]), run_case_level));
    }
    const Json head = {
        {"format", "halflsb run"},
        {"format_version", run_json_version},
        {"tool_version", run.tool_version},
        {"finished", finished},
        {"content_sha256", finished ? Json(unsealed_sha256) : Json(nullptr)},
        {"started_utc", text_json(run.started_utc)},
        {"elapsed_s", number_json(run.elapsed_s)},
        {"plan", plan_json(run)},
        {"rig", {{"file", run.rig_file}, {"sha256", text_json(run.rig_sha256)}}},
        {"seed", run.seed ? Json(*run.seed) : Json(nullptr)},
        {"board", board_json(run.board)},
        {"firmware", firmware_json(run.firmware)},
        {"ended_by", error_json(run.ended_by)},
        {"warnings", run.warnings},
        {"cases_planned", run.cases_planned},
    };
    return joined_document(head, verdict_frame(run, verdict_texts_), case_texts_);
}

}  // namespace halflsb
