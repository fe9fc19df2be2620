#include "runner/report/html_facts.hpp"

#include "runner/report/html_rule.hpp"
#include "runner/report/html_text.hpp"
#include "runner/report/people.hpp"
#include "runner/report/terminal_report.hpp"
#include "runner/world/cautions.hpp"

namespace halflsb {
namespace {

std::string fact(std::string_view key, const std::string& text) {
    return "<dt>" + html_text(key) + "</dt><dd>" + html_text(text.empty() ? "not told" : text) + "</dd>\n";
}

std::string sentence_on(const RunResult& run) {
    const Counts counts = run.counts();
    const auto planned = static_cast<std::int64_t>(std::max(run.cases_planned.size(), run.cases.size()));
    const auto some = [&](std::size_t count, const char* one, const char* several) {
        return std::to_string(count) + " of " + counted(planned, "case", "cases") + " " + (count == 1 ? one : several);
    };
    if (counts.fail > 0) return some(counts.fail, "fails", "fail");
    if (counts.invalid > 0) return some(counts.invalid, "was not captured whole", "were not captured whole");
    if (counts.not_run > 0) return some(counts.not_run, "did not run", "did not run");
    if (counts.undecided > 0) return some(counts.undecided, "is undecided", "are undecided");
    if (run.ended_by || planned == 0) return "nothing can be said of the whole plan";
    return planned == 1 ? "the case passes" : "all " + std::to_string(planned) + " cases pass";
}

std::string notice(std::string_view words, const std::string& text) { return html_element("li", words, text) + "\n"; }

std::string notices(const RunResult& run) {
    std::string out;
    if (run.ended_by) out += notice("grave", "The run ended early: " + to_text(*run.ended_by));
    if (run.firmware.state != FirmwareCheck::State::agrees) {
        out +=
            notice("", run.firmware.image_file.empty()
                           ? "Firmware not verified: nobody compared the board's build-id with that of a file."
                           : "Firmware not verified: the board was not seen to run " + run.firmware.image_file + ".");
    }
    if (!run.latency_verified()) out += notice("", "Latency not verified: no case that ran could tell its latency.");
    for (const std::string& warning : run.warnings) out += notice("", "Warning: " + warning);
    out += notice("", "This page is " + std::string(evidence_caution()) + ".");
    return "<ul class=\"notices\">\n" + out + "</ul>\n";
}

std::string channels_text(const Signal& signal) {
    return signal.channels > 1 ? ", " + std::to_string(signal.channels) + " channels" : "";
}

std::string wire_text(const BoardFacts& board) {
    return "framed, blocks of " + counted(board.block_samples, "sample", "samples") + ", " +
           counted(board.credit_blocks, "block", "blocks") + " of credit" +
           (board.tick_hz > 0 ? ", ticks of " + rate_text(board.tick_hz) : "");
}

std::string files_html(const RunResult& run) {
    std::string out = fact("plan", run.plan_file + ", SHA-256 " + run.plan_sha256);
    for (const PlanPart& part : run.plan_parts) {
        if (!part.path.empty()) out += fact("file of the plan", part.path);
    }
    return out + fact("rig", run.rig_file + ", SHA-256 " + run.rig_sha256);
}

}  // namespace

std::string run_word(const RunResult& run) {
    const Counts counts = run.counts();
    if (counts.fail > 0) return "fail";
    if (counts.invalid > 0 || counts.not_run > 0 || run.ended_by || run.cases.empty()) return "invalid";
    return counts.undecided > 0 ? "undecided" : "pass";
}

std::string head_html(const RunResult& run) {
    const std::string word = run_word(run);
    const Counts counts = run.counts();
    std::string out = "<header>\n" + html_element("h1", "", run.title.empty() ? run.plan_file : run.title) + "\n";
    out += html_element("p", "sub",
                        run.board.rig_name + ", serial " + (run.board.serial.empty() ? "not told" : run.board.serial) +
                            ", captured " + run.started_utc) +
           "\n";
    out += "<p class=\"verdict " + word + "\" id=\"verdict\" data-verdict=\"" + word + "\">" +
           html_element("strong", "", word == "invalid" ? "not complete" : word) + " " +
           html_element("span", "", sentence_on(run)) + "</p>\n<ul class=\"counts\">\n";
    const auto count = [&](std::size_t number, const char* name, const char* key) {
        out += "<li class=\"" + std::string(number > 0 ? key : "none") + "\" data-count=\"" + key + "\">" +
               html_element("b", "", std::to_string(number)) + " " + name + "</li>\n";
    };
    count(counts.pass, "pass", "pass");
    count(counts.fail, "fail", "fail");
    count(counts.invalid, "invalid", "invalid");
    count(counts.undecided, "undecided", "undecided");
    count(counts.not_run, "not run", "not_run");
    return out + "</ul>\n" + notices(run) + "</header>\n";
}

std::string facts_html(const RunResult& run, const std::string& judged_by) {
    const BoardFacts& board = run.board;
    const Signal& signal = run.signal;
    std::string out = "<section id=\"facts\"><h2>The run</h2>\n<dl class=\"facts\">\n";
    out +=
        fact("captured", run.started_utc + ", in " + duration_text(run.elapsed_s) + ", by halflsb " + run.tool_version);
    if (!judged_by.empty()) out += fact("judged again", "by halflsb " + judged_by + ", from the captures");
    out += fact("rig", board.rig_name);
    out += fact("port", board.link);
    out += fact("board", board.serial.empty() ? "" : "serial " + board.serial);
    out += fact("firmware", firmware_text(run));
    out += fact("filter", board.filter.empty() ? ""
                                               : board.filter + ", samples enter at " + board.injection + "; " +
                                                     not_seen_from(board.injection));
    out += fact("signal", text_of(signal.input) + " in, " + text_of(signal.output) + " out, " +
                              rate_text(signal.rate_hz) + channels_text(signal));
    out += fact("wire", board.block_samples > 0 ? wire_text(board) : "");
    out += files_html(run);
    if (run.seed) out += fact("seed", std::to_string(*run.seed));
    if (!run.root.empty()) out += fact("root", run.root);
    if (!run.folder.empty()) out += fact("folder", run.folder);
    return out + "</dl>\n</section>\n";
}

std::string cautions_html() {
    std::string out = "<section id=\"cautions\"><h2>Cautions</h2>\n<ul>\n";
    for (const std::string_view sentence : cautions()) out += html_element("li", "", sentence) + "\n";
    return out + "</ul>\n</section>\n";
}

std::string plan_html(const RunResult& run, const std::string& text) {
    std::string out = "<details id=\"plan\"><summary><h2>The plan</h2> " +
                      html_element("span", "brief", run.plan_file) + "</summary>\n<ol class=\"plan\">\n";
    std::size_t line = 1;
    for (std::size_t at = 0; at < text.size(); ++line) {
        const std::size_t end = std::min(text.find('\n', at), text.size());
        out += "<li id=\"plan-" + std::to_string(line) + "\"><code>" + html_text(text.substr(at, end - at)) +
               "</code></li>\n";
        at = end + 1;
    }
    return out + "</ol>\n</details>\n";
}

}  // namespace halflsb
