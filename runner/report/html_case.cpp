#include "runner/report/html_case.hpp"

#include <algorithm>
#include <variant>

#include "runner/report/html_plot.hpp"
#include "runner/report/html_rule.hpp"
#include "runner/report/html_text.hpp"
#include "runner/report/people.hpp"
#include "runner/report/rule_report.hpp"
#include "runner/report/terminal_report.hpp"

namespace halflsb {
namespace {

/// A word of the plan; long lists and files are told by their size.
struct WordText {
    std::string operator()(std::int64_t value) const { return count_text(value); }
    std::string operator()(double value) const { return rounded_text(value, 6); }
    std::string operator()(const std::string& value) const { return value; }
    std::string operator()(const std::vector<double>& values) const {
        constexpr std::size_t most_listed = 8;
        std::string text;
        for (std::size_t i = 0; i < std::min(values.size(), most_listed); ++i)
            text += (i > 0 ? ", " : "") + rounded_text(values[i], 6);
        if (values.size() > most_listed) text += " and " + std::to_string(values.size() - most_listed) + " more";
        return text;
    }
    std::string operator()(const std::vector<std::vector<double>>& rows) const {
        return counted(static_cast<std::int64_t>(rows.size()), "row", "rows");
    }
    std::string operator()(const std::shared_ptr<const SignalFile>& file) const { return file->path; }
    std::string operator()(const std::shared_ptr<const std::vector<StimulusWords>>& stimuli) const {
        return counted(static_cast<std::int64_t>(stimuli->size()), "stimulus", "stimuli");
    }
};

std::string stimulus_line(const CaseResult& result) {
    std::string text = result.stimulus.shape;
    for (const auto& [name, value] : result.stimulus.values.all())
        text += (text.empty() ? "" : ", ") + name + " = " + std::visit(WordText{}, value);
    return text;
}

std::string fact(std::string_view key, const std::string& html) {
    return "<dt>" + html_text(key) + "</dt><dd>" + html + "</dd>\n";
}

std::string capture_html(const RunResult& run, const CaseResult& result) {
    std::string out = fact("stimulus", html_text(stimulus_line(result)));
    const std::string sent = counted(result.stimulus.samples, "sample", "samples");
    out += fact("sent", html_text(result.stimulus.sha256.empty() ? "not all of " + sent
                                                                 : sent + ", SHA-256 " + result.stimulus.sha256));
    if (!result.capture_file.empty())
        out += fact("capture", html_text(result.capture_file + ", SHA-256 " + result.capture_sha256));
    for (const auto& [key, text] : capture_facts(run, result)) out += fact(key, html_text(text));
    std::string travelled = stream_text(result);
    if (result.stream.line_use_ratio)
        travelled += "; the line was busy " + rounded_text(100.0 * *result.stream.line_use_ratio, 3) + " % of the time";
    out += fact("wire", html_text(travelled));
    if (!result.rerun.empty()) out += fact("rerun", "<code>" + html_text(result.rerun) + "</code>");
    return "<dl class=\"facts\">\n" + out + "</dl>\n";
}

std::string invalid_html(const CaseResult& result) {
    const std::string why = result.invalid ? to_text(*result.invalid) : "the capture is broken, and nobody said why";
    return "<p class=\"invalid\"><strong>Nothing was judged.</strong> The capture is not whole, so it says nothing "
           "about the "
           "filter: " +
           html_text(why) + "</p>\n";
}

/// Of a case that did not pass, the figure of each rule to blame.
std::string blame(const CaseResult& result) {
    if (result.verdict != CaseVerdict::fail && result.verdict != CaseVerdict::undecided) return brief_of(result);
    const Verdict blamed = result.verdict == CaseVerdict::fail ? Verdict::fail : Verdict::undecided;
    std::string text;
    for (const RuleVerdict& rule : result.rules) {
        if (rule.verdict != blamed) continue;
        const std::string title = rule_title(rule), figure = rule_brief(rule);
        // "latency 1 sample of 0" has its title in it.
        const std::string part = figure.starts_with(title + " ") ? figure : title + (figure.empty() ? "" : ": " + figure);
        text += (text.empty() ? "" : "; ") + part;
    }
    return text;
}

/// What decides stands first; each group keeps the order of the plan.
std::vector<const RuleVerdict*> worst_first(const std::vector<RuleVerdict>& rules) {
    std::vector<const RuleVerdict*> sorted;
    for (const RuleVerdict& rule : rules) sorted.push_back(&rule);
    std::stable_sort(sorted.begin(), sorted.end(),
                     [](const auto* a, const auto* b) { return a->verdict > b->verdict; });
    return sorted;
}

}  // namespace

std::string case_anchor(const CaseResult& result) { return "case-" + std::to_string(result.number); }

std::string case_row(const RunResult& run, std::size_t index) {
    const CaseResult& result = run.cases[index];
    const std::string word(name_of(result.verdict));
    return "<tr class=\"" + word + "\"><td class=\"number\">" + std::to_string(result.number) + "</td><td><a href=\"#" +
           case_anchor(result) + "\">" + html_text(result.name) + "</a></td><td>" + verdict_html(word) + "</td><td>" +
           html_text(blame(result)) + "</td><td>" + html_text(name_of(result.grade)) + "</td></tr>\n";
}

std::string plots_html(const CaseResult& result, CasePlots plots, std::size_t first_number) {
    std::string out;
    for (Plot& plot : plots) {
        for (const RuleVerdict& rule : result.rules) {
            // 0: the signal has one channel, or the rule looks at all of them.
            const bool is_here = plot.over == Plot::Over::time && (rule.channel == plot.channel || rule.channel == 0);
            if (!is_here || !rule.first_bad || plot.x.empty()) continue;
            const auto index = static_cast<double>(rule.first_bad->index);
            if (index < plot.x.front() || index > plot.x.back()) continue;
            plot.marks.push_back(
                {index, "first bad sample (" + std::string(kind_name(rule.rule)) + ")", Verdict::fail});
        }
        out += plot_figure(plot, first_number++);
    }
    return out;
}

std::string case_html(const RunResult& run, std::size_t index, const std::string& plots, bool has_plan_text) {
    const CaseResult& result = run.cases[index];
    const std::string word(name_of(result.verdict));
    const Signal signal = signal_of(run, result);
    std::string out = "<details class=\"case " + word + "\" id=\"" + case_anchor(result) + "\" data-number=\"" +
                      std::to_string(result.number) + "\" data-verdict=\"" + word + "\"" +
                      (result.verdict == CaseVerdict::pass ? "" : " open") + ">\n";
    out += "<summary><h3>" + verdict_html(word) + " " + html_text(result.name) + "</h3> " +
           html_element("span", "brief", blame(result)) + "</summary>\n";
    if (result.verdict == CaseVerdict::invalid) out += invalid_html(result);
    for (const RuleVerdict* rule : worst_first(result.rules))
        out += rule_html(*rule, signal, place_html(rule->rule.position, run.plan_file, has_plan_text));
    out += plots;
    out += "<h4>How it was captured</h4>\n" + capture_html(run, result);
    return out + "</details>\n";
}

}  // namespace halflsb
