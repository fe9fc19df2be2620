#include "runner/record/json_answer.hpp"

#include "runner/record/comparison_json.hpp"
#include "runner/record/explanation_json.hpp"
#include "runner/record/json_parts.hpp"
#include "runner/record/json_text.hpp"
#include "runner/record/prediction_json.hpp"
#include "runner/record/run_document.hpp"
#include "runner/world/printable.hpp"

namespace halflsb {

namespace {

Json listed_case_json(const ListedCase& listed) {
    return {{"number", listed.number},
            {"name", listed.name},
            {"labels", listed.labels},
            {"channel", listed.channel ? Json(*listed.channel) : Json(nullptr)},
            {"samples", listed.samples},
            {"start", name_of(listed.start)},
            {"start_samples", listed.start_samples},
            {"signal_s", number_json(listed.signal_s)},
            {"wire_s", number_json(listed.wire_s)}};
}

}  // namespace

std::string_view name_of(AcceptedCase::State state) {
    switch (state) {
        case AcceptedCase::State::new_case:
            return "new";
        case AcceptedCase::State::same:
            return "same";
        case AcceptedCase::State::changed:
            return "changed";
        case AcceptedCase::State::stays:
            break;
    }
    return "stays";
}

JsonAnswer::JsonAnswer(std::string_view command, std::string_view tool_version)
    : command_(command), tool_version_(tool_version) {}

void JsonAnswer::set_error(const Error& error) {
    if (!error_) error_ = error;
}

void JsonAnswer::set_problems(const std::vector<std::string>& problems) {
    problems_ = problems;
    for (std::string& problem : problems_) {
        while (problem.ends_with('\n')) problem.pop_back();
    }
}

void JsonAnswer::add_run(std::string document) {
    while (document.ends_with('\n')) document.pop_back();
    runs_.push_back(std::move(document));
}

void JsonAnswer::set_list(const CaseList& list) {
    Json cases = Json::array();
    for (const ListedCase& listed : list.cases) cases.push_back(listed_case_json(listed));
    list_ = json_value_text({{"samples", list.samples},
                             {"signal_s", number_json(list.signal_s)},
                             {"wire_s", number_json(list.wire_s)},
                             {"cases", std::move(cases)}},
                            1);
}

void JsonAnswer::add_baseline(const AcceptedBaseline& baseline) {
    Json cases = Json::array();
    for (const AcceptedCase& accepted : baseline.cases) {
        cases.push_back({{"name", accepted.name},
                         {"state", name_of(accepted.state)},
                         {"first_different_samples",
                          accepted.first_different_samples ? Json(*accepted.first_different_samples) : Json(nullptr)},
                         {"difference", text_json(accepted.difference)}});
    }
    baselines_.push_back(json_value_text({{"folder", baseline.folder},
                                          {"written_files", baseline.written_files},
                                          {"written_bytes", baseline.written_bytes},
                                          {"cases", std::move(cases)}},
                                         2));
}

void JsonAnswer::set_ports(const std::vector<ListedPort>& ports) {
    Json array = Json::array();
    for (const ListedPort& port : ports) {
        array.push_back({{"device", port.device},
                         {"stable_name", text_json(port.stable_name)},
                         {"description", text_json(port.description)}});
    }
    ports_ = json_value_text(array, 1);
}

void JsonAnswer::set_prediction(const Prediction& prediction) {
    prediction_ = json_value_text(prediction_json(prediction), 1);
}

void JsonAnswer::add_explanation(const Explanation& explanation) {
    explanations_.push_back(json_value_text(explanation_json(explanation), 2));
}

void JsonAnswer::set_comparison(const Comparison& comparison) {
    comparison_ = json_value_text(comparison_json(comparison), 1);
}

std::string JsonAnswer::text(int exit_status) const {
    const Json head = {{"format", command_.empty() ? "halflsb" : "halflsb " + command_},
                       {"format_version", json_answer_version},
                       {"tool_version", tool_version_},
                       {"exit_status", exit_status},
                       {"error", error_json(error_)},
                       {"problems", problems_}};
    std::string whole = json_text(head);
    const std::string_view end = "\n}\n";
    whole.resize(whole.size() - end.size());
    const auto add = [&](const char* key, const std::string& value) {
        whole += ",\n  \"" + std::string(key) + "\": " + value;
    };
    if (command_ == "check") add("list", list_);
    if (command_ == "compare") add("comparison", comparison_);
    if (command_ == "predict") add("prediction", prediction_);
    if (command_ == "ports") add("ports", ports_);
    if (command_ == "accept") {
        add("baselines", "[]");
        fill_last_array(whole, "", baselines_, 2);
    }
    if (command_ == "check" || command_ == "explain") {
        add("explanations", "[]");
        fill_last_array(whole, "", explanations_, 2);
    }
    if (command_ == "check" || command_ == "judge") {
        // Not indented: they are the bytes of run.json.
        add("runs", "[");
        for (std::size_t i = 0; i < runs_.size(); ++i) whole += (i == 0 ? "\n" : ",\n") + runs_[i];
        whole += runs_.empty() ? "]" : "\n]";
    }
    return whole + std::string(end);
}

}  // namespace halflsb
