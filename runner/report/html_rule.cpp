#include "runner/report/html_rule.hpp"

#include <variant>

#include "runner/report/html_text.hpp"
#include "runner/report/people.hpp"
#include "runner/report/rule_report.hpp"

namespace halflsb {
namespace {

TextStyle page_style() { return {}; }

/// For who never read a limit: what is wrong with the figure.
std::string sentence_on(const JudgedFigure& figure, const Rule& rule) {
    const std::string measured = measured_cell(figure, page_style());
    if (figure.verdict == Verdict::undecided) return figure.name + ": " + measured + ", too near its limit to tell";
    if (!figure.value || !figure.limit) return figure.name + ": " + measured;
    std::string limit = limit_cell(figure, rule, page_style());
    limit.erase(0, limit.find(' ') + 1);  // the sign stands in words
    if (std::holds_alternative<LatencyRule>(rule.kind))
        return figure.name + " is " + measured + ", it should be " + limit;
    return figure.name + " is " + measured + (figure.at_least ? ", the least allowed is " : ", the most allowed is ") +
           limit;
}

std::string reasons(const RuleVerdict& verdict, const Signal& signal) {
    std::string out;
    const auto say = [&](const std::string& sentence) { out += html_element("li", "", sentence) + "\n"; };
    for (const JudgedFigure& figure : verdict.figures) {
        if (figure.verdict != Verdict::pass && figure.verdict == verdict.verdict)
            say(sentence_on(figure, verdict.rule));
    }
    if (!verdict.reason.empty()) say(verdict.reason);
    if (verdict.first_bad) say("first bad sample: " + first_bad_text(*verdict.first_bad, signal));
    return out.empty() ? "" : "<ul class=\"reasons\">\n" + out + "</ul>\n";
}

/// A number for programs beside the text for people.
std::string data_cell(const std::optional<double>& value, const std::string& text, std::string_view key) {
    std::string out = "<td class=\"number\" data-key=\"" + std::string(key) + "\"";
    if (value) out += " data-value=\"" + number_attribute(*value) + "\"";
    return out + ">" + html_text(text) + "</td>";
}

std::string figure_row(const JudgedFigure& figure, const Rule& rule) {
    std::string note(name_of(figure.verdict));
    if (!figure.note.empty() && (figure.value || measured_cell(figure, page_style()) != figure.note))
        note += ", " + figure.note;
    return "<tr class=\"" + std::string(name_of(figure.verdict)) + "\" data-figure=\"" + html_text(figure.name) +
           "\" data-verdict=\"" + std::string(name_of(figure.verdict)) + "\">" + html_element("th", "", figure.name) +
           data_cell(figure.value, measured_cell(figure, page_style()), "value") +
           data_cell(figure.limit, limit_cell(figure, rule, page_style()), "limit") +
           data_cell(figure.margin, margin_cell(figure), "margin") +
           html_element("td", "", figure.limit ? note : "told only") + "</tr>\n";
}

std::string figure_table(const RuleVerdict& verdict) {
    if (verdict.figures.empty()) return "";
    std::string out =
        "<div class=\"wide\"><table class=\"figures\">\n<thead><tr><th>figure</th><th class=\"number\">measured</th>"
        "<th class=\"number\">limit</th><th class=\"number\">margin</th><th></th></tr></thead>\n<tbody>\n";
    for (const JudgedFigure& figure : verdict.figures) out += figure_row(figure, verdict.rule);
    return out + "</tbody></table></div>\n";
}

std::string neighbours(const Neighbourhood& around, const Signal& signal) {
    const char* const unit = signal.output.has_lsb() ? ", LSB" : "";
    std::string out =
        "<div class=\"wide\"><table class=\"neighbours\">\n<caption>Around the first bad sample</caption>\n"
        "<thead><tr><th class=\"number\">index</th><th class=\"number\">time, ms</th>"
        "<th class=\"number\">stimulus, code</th><th class=\"number\">response, code</th>";
    for (const char* const heading : {"reference", "error"})
        out += "<th class=\"number\">" + std::string(heading) + unit + "</th>";
    out += "</tr></thead>\n<tbody>\n";
    for (const std::vector<std::string>& row : neighbour_rows(around, signal)) {
        const bool is_bad = row.front() == std::to_string(around.index);
        out += is_bad ? "<tr class=\"fail\">" : "<tr>";
        for (const std::string& cell : row) out += html_element("td", "number", cell);
        out += "</tr>\n";
    }
    return out + "</tbody></table></div>\n";
}

std::string against(const RuleVerdict& verdict) {
    if (verdict.reference.empty()) return "";
    if (verdict.reference == "accepted") return "against the accepted run, ";
    if (verdict.reference == "base") return "against the response of its base, ";
    return "against the " + verdict.reference + " reference, ";
}

}  // namespace

std::string verdict_html(std::string_view word) { return html_element("strong", "word " + std::string(word), word); }

std::string place_html(const PlanPosition& position, const std::string& plan_file, bool has_plan_text) {
    const std::string text = html_text(to_text(position));
    if (!has_plan_text || position.file != plan_file || position.line < 1) return text;
    return "<a href=\"#plan-" + std::to_string(position.line) + "\">" + text + "</a>";
}

std::string rule_html(const RuleVerdict& verdict, const Signal& signal, const std::string& place) {
    const auto* latency = std::get_if<LatencyRule>(&verdict.rule.kind);
    const bool is_implicit = latency != nullptr && latency->implicit;
    const std::string word(name_of(verdict.verdict));
    std::string out = "<section class=\"rule " + word + "\" data-rule=\"" + html_text(kind_name(verdict.rule)) +
                      "\" data-channel=\"" + std::to_string(verdict.channel) + "\" data-verdict=\"" + word + "\">\n";
    out += "<h4>" + html_text(rule_title(verdict)) + " " + verdict_html(word) + " <small>" +
           html_text(against(verdict)) + (is_implicit ? std::string("asked of every case") : "asked at " + place) +
           "</small></h4>\n";
    out += reasons(verdict, signal);
    out += "<div class=\"tables\">\n" + figure_table(verdict);
    if (verdict.first_bad) out += neighbours(*verdict.first_bad, signal);
    out += "</div>\n";
    if (verdict.evidence) out += html_element("p", "note", evidence_text(verdict)) + "\n";
    return out + "</section>\n";
}

}  // namespace halflsb
