#include "runner/report/html_report.hpp"

#include <catch2/catch.hpp>

#include "runner/report/html_assets.hpp"
#include "runner/report/html_facts.hpp"
#include "runner/world/cautions.hpp"
#include "tests/runner/report/sample_run.hpp"

using namespace halflsb;

namespace {

std::size_t count(const std::string& text, const std::string& part) {
    std::size_t found = 0;
    for (std::size_t at = text.find(part); at != std::string::npos; at = text.find(part, at + 1)) ++found;
    return found;
}

Plot a_plot(std::size_t points) {
    Plot plot;
    plot.title = "stimulus and response";
    plot.rate_hz = 1200.0;
    PlotCurve response{PlotCurve::Role::response, "response", {}, {}, {}};
    for (std::size_t i = 0; i < points; ++i) {
        plot.x.push_back(static_cast<double>(i));
        response.values.push_back(0.123456 * static_cast<double>(i % 7));
    }
    plot.panels.push_back({"signal", "LSB", {response}});
    return plot;
}

/// The page of the run, its cases added one by one as they would be.
std::string page_of(const RunResult& run, const CasePlots& plots = {}, const std::string& plan_text = "title = \"CW-7\"\n") {
    HtmlReport report(plan_text);
    RunResult so_far = run;
    so_far.cases.clear();
    for (const CaseResult& result : run.cases) {
        so_far.cases.push_back(result);
        report.add_case(so_far, result.verdict == CaseVerdict::invalid ? CasePlots() : plots);
    }
    return report.document(run);
}

/// What stands between the page's own style and its own scripts.
std::string body_of(const std::string& page) {
    const std::size_t begin = page.find("<body>");
    return page.substr(begin, page.find("<script>") - begin);
}

}  // namespace

TEST_CASE("html: verdict first, then the cases, those that fail before those that pass, then the facts", "[report]") {
    const std::string body = body_of(page_of(sample::run(), {a_plot(100)}));
    std::size_t at = 0;
    for (const char* const part :
         {"CW-7 load-cell filter, release acceptance", "data-verdict=\"fail\"><strong>fail</strong>", "1 of 5 cases fails",
          "id=\"cases\"", "soak", "Cases that fail", "mains hum, half scale", "Cases that were not captured whole",
          "belt start", "Nothing was judged", "Cases that are undecided", "Cases that pass", "tare step", "id=\"facts\"",
          "CW7-0042", "not verified", "framed, blocks of 256 samples", "id=\"cautions\"", "id=\"plan-1\"",
          "What the words mean"}) {
        INFO(part);
        const std::size_t found = body.find(part, at);
        REQUIRE(found != std::string::npos);
        at = found;
    }
    for (const std::string_view caution : cautions()) CHECK(body.find(caution) != std::string::npos);
    CHECK(body.find("Firmware not verified") != std::string::npos);
    CHECK(body.find(std::string(64, 'b')) != std::string::npos);  // hash of the plan
    CHECK(body.find(std::string(64, 'a')) != std::string::npos);  // of a capture
    CHECK(count(body, "<figure class=\"plot\"") == 3);            // none of the invalid case
    CHECK(body.find("isolated = true") != std::string::npos);
}

TEST_CASE("html: figures are told for people and for programs, with their limit and the line that asked", "[report]") {
    const std::string body = body_of(page_of(sample::run()));
    CHECK(body.find("data-figure=\"max\" data-verdict=\"fail\"") != std::string::npos);
    CHECK(body.find("data-key=\"value\" data-value=\"1.5\">1.5 LSB</td>") != std::string::npos);
    CHECK(body.find("max is 1.5 LSB, the most allowed is 0.5 LSB") != std::string::npos);
    CHECK(body.find("first bad sample: 1041, at 867.50 ms") != std::string::npos);
    CHECK(body.find("<a href=\"#plan-20\">cw7.toml:20:3</a>") != std::string::npos);
    CHECK(page_of(sample::run(), {}, "").find("<a href=\"#plan-20\">") == std::string::npos);
}

TEST_CASE("html: no text of a plan, a board or a file becomes markup", "[report]") {
    const std::string hostile = "</script></td><script>alert(1)</script><img src=x onerror='alert(2)'>\" \xe2\x80\xa8&amp;";
    RunResult run = sample::run();
    run.title = run.plan_file = run.rig_file = run.tool_version = run.folder = run.root = hostile;
    run.started_utc = run.plan_sha256 = run.rig_sha256 = hostile;
    run.board = {hostile, hostile, hostile, hostile, hostile, hostile, 16, 2, 1, 1000};
    run.firmware.image_file = hostile;
    run.warnings = {hostile};
    run.signal.unit = run.signal.filter = hostile;
    run.ended_by = Error{ErrorKind::bench, hostile, hostile, hostile};
    run.cases_planned.back() = hostile;
    for (CaseResult& result : run.cases) {
        result.name = result.rerun = result.capture_file = result.capture_sha256 = hostile;
        result.stimulus.shape = result.stimulus.sha256 = hostile;
        result.stimulus.values.set(hostile, hostile);
        result.settings = {{hostile, 1, {}}};
        if (result.invalid) result.invalid = Error{ErrorKind::bench, hostile, hostile, hostile};
        for (RuleVerdict& rule : result.rules) {
            rule.reason = rule.reference = rule.rule.position.file = hostile;
            for (JudgedFigure& figure : rule.figures) figure.name = figure.unit = figure.note = hostile;
        }
    }
    Plot plot = a_plot(3);
    plot.title = plot.note = plot.panels[0].unit = plot.panels[0].quantity = plot.panels[0].curves[0].name = hostile;
    plot.marks = {{1.0, hostile, Verdict::fail}};
    const std::string page = page_of(run, {plot}, hostile + "\n" + hostile);
    CHECK(page.find("<script>alert") == std::string::npos);
    CHECK(page.find("<img") == std::string::npos);
    CHECK(page.find("\xe2\x80\xa8") == std::string::npos);
    CHECK(count(page, "</script>") == 2 + 3);  // two of the page, and the data of three plots
    CHECK(count(page, "<script") == 2 + 3);
    CHECK(count(body_of(page), "alert(1)") > 60);  // it is shown, though
}

TEST_CASE("html: the page names its scripts and its style by their hash and loads nothing", "[report]") {
    const std::string page = page_of(sample::run());
    const std::size_t begin = page.find("Content-Security-Policy");
    const std::string policy = page.substr(begin, page.find('>', begin) - begin);
    CHECK(policy.find("default-src 'none'") != std::string::npos);
    CHECK(count(policy, "'sha256-") == 3);
    CHECK(policy.find("unsafe") == std::string::npos);
    const std::string body = body_of(page);
    for (const char* const reference : {"src=", "href=\"http", "url(", "@import", "sourceMappingURL"})
        CHECK(body.find(reference) == std::string::npos);
    CHECK(page.find("sourceMappingURL") == std::string::npos);
    CHECK(plot_copyright().find("Permission is hereby granted") != std::string_view::npos);
    CHECK(body.find("Permission is hereby granted") != std::string::npos);
}

TEST_CASE("html: a run that ended early never looks passed", "[report]") {
    RunResult run = sample::run();
    run.cases = {sample::passed_case()};
    CHECK(run_word(run) == "invalid");
    run.cases_planned = {"tare step"};
    CHECK(run_word(run) == "pass");
    CHECK(head_html(run).find("the case passes") != std::string::npos);
    run.ended_by = Error{ErrorKind::interrupted, "the run", "interrupted", "start it again"};
    CHECK(run_word(run) == "invalid");
    CHECK(head_html(run).find("The run ended early") != std::string::npos);
    run.ended_by.reset();
    run.cases.clear();
    run.cases_planned.clear();
    CHECK(run_word(run) == "invalid");
    CHECK(head_html(run).find("nothing can be said") != std::string::npos);
}

TEST_CASE("html: plots are bounded, and those of a failed case find room behind a thousand passed ones", "[report]") {
    RunResult run = sample::run();
    run.cases.clear();
    HtmlReport report("");
    const CasePlots plots{a_plot(20000), a_plot(20000)};
    for (int i = 0; i < 60; ++i) {
        run.cases.push_back(i == 59 ? sample::failed_case() : sample::passed_case());
        report.add_case(run, plots);
    }
    const std::string page = report.document(run);
    CHECK(page.size() < (std::size_t{25} << 20));
    CHECK(page.find("as many as it can hold") != std::string::npos);
    const std::size_t failed = page.find("Cases that fail"), passed = page.find("Cases that pass");
    CHECK(count(page.substr(failed, passed - failed), "<figure") == 2);
}
