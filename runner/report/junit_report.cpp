#include "runner/report/junit_report.hpp"

#include <algorithm>
#include <pugixml.hpp>
#include <set>
#include <sstream>

#include "runner/report/people.hpp"
#include "runner/report/rule_report.hpp"
#include "runner/report/terminal_report.hpp"
#include "runner/world/printable.hpp"

namespace halflsb {

namespace {

constexpr int text_columns = 100;

void set(pugi::xml_node node, const char* name, const std::string& value) {
    node.append_attribute(name).set_value(value.c_str());
}

/// Readers split a class name at its dots, so the plan's name may hold none of its own.
std::string class_name(const RunResult& run) {
    std::string stem = run.plan_file.substr(run.plan_file.rfind('/') + 1);
    stem.resize(std::min(stem.rfind('.'), stem.size()));
    for (char& c : stem) c = c == '.' ? '_' : c;
    return "halflsb." + xml_text(stem.empty() ? "plan" : stem);
}

/// Where two names become the same in XML the later one is numbered: readers keep only the first.
class Names {
public:
    std::string unique(const std::string& name) {
        std::string candidate = xml_text(name);
        for (int i = 2; !taken_.insert(candidate).second; ++i)
            candidate = xml_text(name) + " (" + std::to_string(i) + ")";
        return candidate;
    }

private:
    std::set<std::string> taken_;
};

void add_outcome(pugi::xml_node test, const char* element, const std::string& message, const std::string& text) {
    pugi::xml_node node = test.append_child(element);
    set(node, "message", xml_text(message));
    node.append_child(pugi::node_pcdata).set_value(xml_text(text.empty() ? message : message + "\n" + text).c_str());
}

/// The rules that a case's verdict hangs on, in one line.
std::string message_of(const CaseResult& result, Verdict blamed) {
    std::string message;
    for (const RuleVerdict& rule : result.rules) {
        if (rule.verdict != blamed) continue;
        std::string part = rule_title(rule);
        // "max 1.5 LSB of 0.5" where there is a number, else why there is none.
        for (const JudgedFigure& figure : rule.figures) {
            if (blamed == Verdict::fail && figure.verdict == blamed && figure.value && figure.limit) {
                const auto [value, limit] = compared_text(*figure.value, *figure.limit);
                part += ": " + figure.name + " " + value + " " + figure.unit +
                        (figure.at_least ? " below " : " against ") + limit;
                break;
            }
        }
        if (!rule.reason.empty()) part += ": " + rule.reason;
        message += (message.empty() ? "" : "; ") + part;
    }
    return message.empty() ? std::string(name_of(result.verdict)) : message;
}

void add_case(pugi::xml_node test, const RunResult& run, std::size_t index) {
    const CaseResult& result = run.cases[index];
    // Its report is laid out against the names of all cases: not for those that need none.
    if (result.verdict == CaseVerdict::pass) return;
    TextStyle style;
    style.width = text_columns;
    const std::string text = case_text(run, index, style);
    switch (result.verdict) {
        case CaseVerdict::pass:
            break;
        case CaseVerdict::fail:
            add_outcome(test, "failure", message_of(result, Verdict::fail), text);
            break;
        case CaseVerdict::undecided:
            add_outcome(test, "skipped", "undecided: " + message_of(result, Verdict::undecided), text);
            break;
        case CaseVerdict::invalid:
            add_outcome(test, "error",
                        "invalid: " + (result.invalid ? to_text(*result.invalid) : "the capture is broken"), text);
            break;
    }
}

}  // namespace

std::string xml_text(std::string_view text) {
    // printable_lines() would also show signs that turn the direction; XML may hold those.
    std::string out;
    for (const std::string valid = valid_utf8(text); const char c : valid) {
        const auto byte = static_cast<unsigned char>(c);
        if (byte < 0x20 && c != '\n' && c != '\t') {
            out += printable(std::string_view(&c, 1));
        } else {
            out += c;
        }
    }
    for (const std::string_view noncharacter : {"\xEF\xBF\xBE", "\xEF\xBF\xBF"}) {
        for (std::size_t at = 0; (at = out.find(noncharacter, at)) != std::string::npos;)
            out.replace(at, 3, "\xEF\xBF\xBD");
    }
    return out;
}

std::string junit_report(const RunResult& run) {
    const Counts counts = run.counts();
    const std::size_t planned = std::max(run.cases_planned.size(), run.cases.size());
    pugi::xml_document document;
    pugi::xml_node declaration = document.append_child(pugi::node_declaration);
    set(declaration, "version", "1.0");
    set(declaration, "encoding", "UTF-8");
    pugi::xml_node suites = document.append_child("testsuites");
    pugi::xml_node suite = suites.append_child("testsuite");
    const std::string title = run.title.empty() ? run.plan_file : run.title;
    for (pugi::xml_node node : {suites, suite}) {
        set(node, "name", xml_text(title));
        set(node, "tests", std::to_string(planned + (run.ended_by ? 1 : 0)));
        set(node, "failures", std::to_string(counts.fail));
        set(node, "errors", std::to_string(counts.invalid + (run.ended_by ? 1 : 0)));
        set(node, "skipped", std::to_string(counts.undecided + counts.not_run));
        set(node, "time", fixed_text(run.elapsed_s, 3));
    }
    set(suite, "timestamp", xml_text(run.started_utc));

    Names names;
    const auto add_test = [&](const std::string& name, double elapsed_s) {
        pugi::xml_node test = suite.append_child("testcase");
        set(test, "classname", class_name(run));
        set(test, "name", names.unique(name));
        set(test, "time", fixed_text(elapsed_s, 3));
        return test;
    };
    for (std::size_t i = 0; i < planned; ++i) {
        if (i < run.cases.size()) {
            add_case(add_test(run.cases[i].name, run.cases[i].elapsed_s), run, i);
        } else {
            add_outcome(add_test(run.cases_planned[i], 0.0), "skipped", "not run", "");
        }
    }
    if (run.ended_by) add_outcome(add_test("(the run)", 0.0), "error", to_text(*run.ended_by), "");

    std::ostringstream out;
    document.save(out, "  ");
    return out.str();
}

}  // namespace halflsb
