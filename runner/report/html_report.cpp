#include "runner/report/html_report.hpp"

#include <cstdint>

#include "runner/report/html_assets.hpp"
#include "runner/report/html_case.hpp"
#include "runner/report/html_facts.hpp"
#include "runner/report/html_text.hpp"
#include "runner/world/sha256.hpp"

namespace halflsb {
namespace {

constexpr std::size_t longest_plan_bytes = std::size_t{128} << 10;
/// A browser opens a page of this size within seconds.
constexpr std::size_t most_plot_bytes = std::size_t{12} << 20;

/// The digits of a hash as a source of a content security policy: "'sha256-...='" (RFC 4648 base64).
std::string policy_source(std::string_view text) {
    constexpr std::string_view alphabet = "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/";
    const std::string hex = sha256_of_text(text);
    const auto digit = [&](std::size_t i) -> std::uint32_t {
        if (i >= hex.size()) return 0;
        return static_cast<std::uint32_t>(hex[i] <= '9' ? hex[i] - '0' : hex[i] - 'a' + 10);
    };
    // Three hexadecimal digits are two of base64; 64 are 43, and one sign that fills up.
    std::string out = "'sha256-";
    for (std::size_t i = 0; i < hex.size(); i += 3) {
        const std::uint32_t bits = digit(i) << 8 | digit(i + 1) << 4 | digit(i + 2);
        out += alphabet[bits >> 6];
        if (i + 1 < hex.size()) out += alphabet[bits & 63];
    }
    return out + "='";
}

std::string policy() {
    return "default-src 'none'; script-src " + policy_source(plot_library()) + " " + policy_source(report_script()) +
           "; style-src " + policy_source(report_style()) + "; base-uri 'none'; form-action 'none'";
}

std::string_view heading_of(CaseVerdict verdict) {
    switch (verdict) {
        case CaseVerdict::fail:
            return "Cases that fail";
        case CaseVerdict::invalid:
            return "Cases that were not captured whole";
        case CaseVerdict::undecided:
            return "Cases that are undecided";
        case CaseVerdict::pass:
            break;
    }
    return "Cases that pass";
}

std::string not_run_html(const RunResult& run) {
    std::string out;
    for (std::size_t i = run.cases.size(); i < run.cases_planned.size(); ++i) {
        out += "<tr class=\"not_run\"><td></td>" + html_element("td", "", run.cases_planned[i]) +
               "<td>not run</td><td></td><td></td></tr>\n";
    }
    return out;
}

std::string script(std::string_view attributes, std::string_view text) {
    return "<script" + std::string(attributes) + ">" + std::string(text) + "</script>\n";
}

}  // namespace

HtmlReport::HtmlReport(std::string plan_text, std::string judged_by)
    : plan_text_(plan_text.size() > longest_plan_bytes ? std::string() : std::move(plan_text)),
      judged_by_(std::move(judged_by)) {}

std::string HtmlReport::plots_of(const CaseResult& result, const CasePlots& plots) {
    if (plots.empty()) return "";
    std::string html = plots_html(result, plots, plots_ + 1);
    std::size_t& bytes = result.verdict == CaseVerdict::pass ? bytes_of_passed_ : bytes_of_others_;
    if (bytes + html.size() > most_plot_bytes) {
        return html_element("p", "note",
                            "No plot: this page has as many as it can hold. halflsb judge RUN --case NAME --html FILE "
                            "draws this case alone.") +
               "\n";
    }
    bytes += html.size();
    plots_ += plots.size();
    return html;
}

void HtmlReport::add_case(const RunResult& run, const CasePlots& plots) {
    const std::size_t index = run.cases.size() - 1;
    const CaseResult& result = run.cases[index];
    rows_.push_back(case_row(run, index));
    cases_.push_back({result.verdict, case_html(run, index, plots_of(result, plots), !plan_text_.empty())});
}

std::string HtmlReport::document(const RunResult& run) const {
    std::string out = "<!DOCTYPE html>\n<html lang=\"en\">\n<head>\n<meta charset=\"utf-8\">\n";
    out += "<meta http-equiv=\"Content-Security-Policy\" content=\"" + policy() + "\">\n";
    out += "<meta name=\"viewport\" content=\"width=device-width, initial-scale=1\">\n";
    out += html_element("title", "", run_word(run) + ": " + (run.title.empty() ? run.plan_file : run.title)) + "\n";
    out += "<style>" + std::string(report_style()) + "</style>\n</head>\n<body>\n" + head_html(run);
    out +=
        "<noscript><p class=\"note\">The plots need scripts. All that was judged stands in the "
        "tables.</p></noscript>\n";
    out +=
        "<section id=\"cases\"><h2>Cases</h2>\n<div class=\"wide\"><table class=\"cases\">\n<thead><tr>"
        "<th "
        "class=\"number\">no.</th><th>case</th><th>verdict</th><th>figures</th><th>capture</th></tr></"
        "thead>\n<tbody>\n";
    for (const std::string& row : rows_) out += row;
    out += not_run_html(run) + "</tbody></table></div>\n</section>\n";
    for (const CaseVerdict verdict :
         {CaseVerdict::fail, CaseVerdict::invalid, CaseVerdict::undecided, CaseVerdict::pass}) {
        std::string group;
        for (const Part& part : cases_) group += part.verdict == verdict ? part.html : "";
        if (!group.empty())
            out += "<section>" + html_element("h2", "", heading_of(verdict)) + "\n" + group + "</section>\n";
    }
    out += facts_html(run, judged_by_) + cautions_html();
    if (!plan_text_.empty()) out += plan_html(run, plan_text_);
    out += std::string(report_words());
    out += "<footer><details><summary>The plots are drawn by dygraphs</summary>\n<pre>" + html_text(plot_copyright()) +
           "</pre></details></footer>\n";
    return out + script("", plot_library()) + script("", report_script()) + "</body>\n</html>\n";
}

}  // namespace halflsb
