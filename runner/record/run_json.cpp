#include "runner/record/run_json.hpp"

#include <cmath>
#include <nlohmann/json.hpp>
#include <variant>

#include "runner/record/json_text.hpp"

namespace halflsb {

namespace {

using Json = nlohmann::ordered_json;

Json number(std::optional<double> value) { return value && std::isfinite(*value) ? Json(*value) : Json(nullptr); }

Json count(std::optional<std::uint32_t> value) { return value ? Json(*value) : Json(nullptr); }

/// What was not given is null, not "".
Json text(std::string_view value) { return value.empty() ? Json(nullptr) : Json(value); }

std::string_view name_of(ErrorKind kind) {
    switch (kind) {
        case ErrorKind::usage:
            return "usage";
        case ErrorKind::input:
            return "input";
        case ErrorKind::bench:
            return "bench";
        case ErrorKind::output:
            return "output";
        case ErrorKind::interrupted:
            return "interrupted";
        case ErrorKind::defect:
            break;
    }
    return "defect";
}

Json error_json(const std::optional<Error>& error) {
    if (!error) return nullptr;
    return {{"kind", name_of(error->kind)},
            {"place", text(error->place)},
            {"problem", error->problem},
            {"remedy", text(error->remedy)}};
}

Json signal_json(const Signal& signal) {
    return {{"rate_hz", number(signal.rate_hz)},
            {"input", signal.input.name},
            {"output", signal.output.name},
            {"output_per_input", number(signal.output_per_input)},
            {"filter", text(signal.filter)},
            {"unit", text(signal.unit)},
            {"full_scale_unit", number(signal.full_scale_unit)},
            {"quantise", name_of(signal.quantise)}};
}

Json board_json(const BoardFacts& board) {
    return {{"rig_name", text(board.rig_name)},
            {"link", text(board.link)},
            {"serial", text(board.serial)},
            {"build_id", text(board.build_id)},
            {"filter", text(board.filter)},
            {"injection", text(board.injection)},
            {"block_samples", board.block_samples},
            {"credit_blocks", board.credit_blocks},
            {"tick_hz", board.tick_hz}};
}

Json firmware_json(const FirmwareCheck& firmware) {
    return {{"verified", firmware.state == FirmwareCheck::State::agrees},
            {"image_file", text(firmware.image_file)},
            {"image_build_id", text(firmware.image_build_id)},
            {"before_run_skipped", firmware.before_run_skipped}};
}

Json figure_json(const JudgedFigure& figure) {
    Json json = {{"name", figure.name},           {"value", number(figure.value)},
                 {"limit", number(figure.limit)}, {"margin", number(figure.margin)},
                 {"unit", text(figure.unit)},     {"at_least", figure.at_least},
                 {"passed", figure.passed},       {"note", text(figure.note)}};
    // The judge's word for a response without any error: then no ratio to the error exists.
    if (!figure.value && figure.passed && figure.note == "identical") json["identical"] = true;
    return json;
}

Json neighbourhood_json(const std::optional<Neighbourhood>& around, const Signal& signal) {
    if (!around) return nullptr;
    Json reference = Json::array();
    for (const double value : around->reference) reference.push_back(number(value));
    Json json = {{"index_samples", around->index},
                 {"first_index_samples", around->first_index},
                 {"stimulus_codes", around->stimulus},
                 {"response_codes", around->response}};
    json[signal.output.has_lsb() ? "reference_lsb" : "reference_value"] = std::move(reference);
    return json;
}

Json rule_json(const RuleVerdict& verdict, const Signal& signal) {
    const auto* latency = std::get_if<LatencyRule>(&verdict.rule.kind);
    Json figures = Json::array();
    for (const JudgedFigure& figure : verdict.figures) figures.push_back(figure_json(figure));
    const PlanPosition& at = verdict.rule.position;
    return {{"kind", kind_name(verdict.rule)},
            {"implicit", latency != nullptr && latency->implicit},
            {"reference", text(verdict.reference)},
            {"position", {{"file", text(at.file)}, {"line", at.line}, {"column", at.column}}},
            {"verdict", name_of(verdict.verdict)},
            {"reason", text(verdict.reason)},
            {"figures", std::move(figures)},
            {"first_bad", neighbourhood_json(verdict.first_bad, signal)}};
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
            {"streaming_s", number(stream.streaming_s)},
            {"line_use_ratio", number(stream.line_use_ratio)},
            {"total_ticks", stream.ticks_total},
            {"largest_ticks_per_sample", stream.ticks_largest}};
}

Json case_json(const CaseResult& result, const Signal& signal) {
    Json rules = Json::array();
    for (const RuleVerdict& rule : result.rules) rules.push_back(rule_json(rule, signal));
    Json capture = nullptr;
    if (!result.capture_file.empty())
        capture = {{"file", result.capture_file}, {"sha256", text(result.capture_sha256)}};
    return {{"number", result.number},
            {"name", result.name},
            {"verdict", name_of(result.verdict)},
            {"grade", name_of(result.grade)},
            {"invalid", error_json(result.invalid)},
            {"rules", std::move(rules)},
            {"latency_told", result.latency_told},
            {"stream", stream_json(result.stream)},
            {"started_utc", text(result.started_utc)},
            {"elapsed_s", number(result.elapsed_s)},
            {"capture", std::move(capture)},
            {"rerun", text(result.rerun)}};
}

}  // namespace

std::string run_json(const RunResult& run, bool finished) { return GrowingRunJson().document(run, finished); }

std::string GrowingRunJson::document(const RunResult& run, bool finished) {
    const Counts counts = run.counts();
    constexpr std::size_t case_level = 2;
    while (case_texts_.size() < run.cases.size()) {
        case_texts_.push_back(json_value_text(case_json(run.cases[case_texts_.size()], run.signal), case_level));
    }
    // Everything but the cases, which stand last and are put in as text.
    const Json frame = {
        {"format", "halflsb run"},
        {"format_version", run_json_version},
        {"tool_version", run.tool_version},
        {"finished", finished},
        {"started_utc", text(run.started_utc)},
        {"elapsed_s", number(run.elapsed_s)},
        {"title", text(run.title)},
        {"plan", {{"file", run.plan_file}, {"sha256", text(run.plan_sha256)}}},
        {"rig", {{"file", run.rig_file}, {"sha256", text(run.rig_sha256)}}},
        {"seed", run.seed ? Json(*run.seed) : Json(nullptr)},
        {"signal", signal_json(run.signal)},
        {"board", board_json(run.board)},
        {"firmware", firmware_json(run.firmware)},
        {"latency_verified", run.latency_verified()},
        {"counts",
         {{"pass", counts.pass},
          {"fail", counts.fail},
          {"invalid", counts.invalid},
          {"undecided", counts.undecided},
          {"not_run", counts.not_run}}},
        {"ended_by", error_json(run.ended_by)},
        {"warnings", run.warnings},
        {"cases_planned", run.cases_planned},
        {"cases", Json::array()},
    };
    std::string whole = json_text(frame);
    if (case_texts_.empty()) return whole;
    const std::string_view empty_end = "[]\n}\n";
    whole.resize(whole.size() - empty_end.size());
    const std::string indent(2 * case_level, ' ');
    for (std::size_t i = 0; i < case_texts_.size(); ++i) whole += (i == 0 ? "[\n" : ",\n") + indent + case_texts_[i];
    return whole + "\n  ]\n}\n";
}

}  // namespace halflsb
