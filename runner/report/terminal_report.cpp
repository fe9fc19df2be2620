#include "runner/report/terminal_report.hpp"

#include <algorithm>

#include "runner/report/people.hpp"
#include "runner/report/rule_report.hpp"
#include "runner/world/cautions.hpp"
#include "runner/world/printable.hpp"

namespace halflsb {

namespace {

constexpr std::size_t field_columns = 12;   // two blanks, the longest key, a gap of two
constexpr std::size_t verdict_columns = 9;  // "undecided"

std::string field(const TextStyle& style, std::string_view key, const std::string& value) {
    return labelled(style, "  " + std::string(key), value, field_columns);
}

std::string titled(const std::string& file, const std::string& title) {
    return title.empty() ? printable(file) : printable(file) + ", " + printable(title);
}

Ink ink_of(CaseVerdict verdict) {
    switch (verdict) {
        case CaseVerdict::pass:
            return Ink::good;
        case CaseVerdict::fail:
            return Ink::bad;
        case CaseVerdict::invalid:
        case CaseVerdict::undecided:
            break;
    }
    return Ink::doubtful;
}

std::string firmware_line(const RunResult& run) {
    const std::string id = run.board.build_id.empty() ? "no build-id" : "build-id " + printable(run.board.build_id);
    if (run.firmware.state == FirmwareCheck::State::agrees) {
        return id + ", agrees with " + printable(run.firmware.image_file) +
               (run.firmware.before_run_skipped ? " (before_run skipped: the board already runs it)" : "");
    }
    return id + ", not verified";
}

/// What stands at the end of a case's line.
std::string case_brief(const CaseResult& result) {
    std::string brief;
    const auto add = [&](const std::string& part) {
        if (!part.empty()) brief += (brief.empty() ? "" : ", ") + part;
    };
    if (result.verdict == CaseVerdict::invalid) return "nothing judged";
    if (result.verdict == CaseVerdict::pass) {
        for (const RuleVerdict& rule : result.rules) {
            const std::string part = rule_brief(rule);
            add(part.empty() || rule.channel == 0 ? part : part + " on channel " + std::to_string(rule.channel));
        }
    } else {
        const Verdict blamed = result.verdict == CaseVerdict::fail ? Verdict::fail : Verdict::undecided;
        for (const RuleVerdict& rule : result.rules) {
            if (rule.verdict == blamed) add(rule_title(rule));
        }
    }
    if (result.grade == Grade::plausible) add("capture plausible, not proven");
    return brief;
}

std::string case_line(const RunResult& run, std::size_t index, const TextStyle& style) {
    const CaseResult& result = run.cases[index];
    const std::string total = std::to_string(std::max(run.cases_planned.size(), run.cases.size()));
    const std::string place = padded_left(std::to_string(index + 1), total.size()) + "/" + total;

    std::size_t longest = columns_of(printable(result.name));
    for (const std::string& name : run.cases_planned) longest = std::max(longest, columns_of(printable(name)));
    const auto width = static_cast<std::size_t>(std::max(style.width, 40));
    const std::size_t beside_name = columns_of(place) + 2 + 2 + verdict_columns;
    // Names come first: cases of one [case.each] differ only in them. Figures that find no room have the next line.
    const std::size_t name_columns = std::min(longest, width - std::min(width - 16, beside_name));

    std::string line = place + "  " + padded(cut_to(style, printable(result.name), name_columns), name_columns) + "  ";
    const std::string brief = case_brief(result);
    const bool fits = columns_of(line) + verdict_columns + 2 + columns_of(brief) <= width;
    const std::string_view word = name_of(result.verdict);
    line += painted(style, ink_of(result.verdict), word);
    if (brief.empty()) return line + "\n";
    if (fits)
        return line + std::string(verdict_columns - std::min(verdict_columns, word.size()) + 2, ' ') + brief + "\n";
    return line + "\n" + wrapped(style, brief, columns_of(place) + 2);
}

std::string board_counters_text(const StreamFacts& stream) {
    if (!stream.frames_bad_at_board) return "the board could not be asked for its counters";
    return "at the board " + counted(*stream.frames_bad_at_board, "bad frame", "bad frames") + ", " +
           counted(stream.bytes_lost_at_board.value_or(0), "byte", "bytes") + " lost, " +
           counted(stream.gaps_at_board.value_or(0), "gap", "gaps");
}

/// Some rule is about time: of the others it would be a line that nobody asked for.
bool is_about_time(const CaseResult& result) {
    return std::any_of(result.rules.begin(), result.rules.end(), [](const RuleVerdict& verdict) {
        const auto* latency = std::get_if<LatencyRule>(&verdict.rule.kind);
        return std::holds_alternative<DeadlineRule>(verdict.rule.kind) || (latency != nullptr && !latency->implicit);
    });
}

std::string spread_text(const Spread& spread, double scale, const std::string& unit) {
    return "median " + rounded_text(spread.median * scale, 3) + ", 99 % " +
           rounded_text(spread.percentile_99 * scale, 3) + ", most " + rounded_text(spread.largest * scale, 3) + unit;
}

/// What the blocks took, on the board and there and back.
std::string time_text(const StreamFacts& stream) {
    std::string text;
    if (stream.ticks_per_sample)
        text = "of a sample on the board " + spread_text(*stream.ticks_per_sample, 1.0, " ticks");
    if (stream.round_trip_s) {
        text +=
            (text.empty() ? "" : "; ") + ("of a block there and back " + spread_text(*stream.round_trip_s, 1e3, " ms"));
    }
    return text;
}

std::string invalid_block(const CaseResult& result, const TextStyle& style) {
    std::string out;
    if (result.invalid) {
        out += wrapped(style, printable_lines(to_text(*result.invalid)), 2);
    } else {
        out += "  the capture is broken, and nobody said why\n";
    }
    return out + wrapped(style, stream_text(result), 2);
}

/// Board, firmware, filter and signal.
std::string board_lines(const RunResult& run, const TextStyle& style) {
    const std::string serial = run.board.serial.empty() ? "no serial number" : "serial " + printable(run.board.serial);
    std::string out = field(style, "board", serial);
    out += field(style, "firmware", firmware_line(run));
    out += field(style, "filter",
                 printable(run.board.filter) + ", samples enter at " + printable(run.board.injection) + "; " +
                     not_seen_from(run.board.injection));
    const Signal& signal = run.signal;
    return out + field(style, "signal",
                       text_of(signal.input) + " in, " + text_of(signal.output) + " out, " + rate_text(signal.rate_hz) +
                           (signal.channels > 1 ? ", " + std::to_string(signal.channels) + " channels" : ""));
}

/// Lines or "".
std::string capture_lines(const RunResult& run, const CaseResult& result, const TextStyle& style) {
    std::string out;
    for (const auto& [key, text] : capture_facts(run, result)) out += wrapped(style, padded(key, 10) + text, 2);
    return out;
}

std::string purpose_lines(const std::vector<CasePurpose>& cases, const TextStyle& style) {
    std::string out;
    for (const CasePurpose& one : cases) {
        out += wrapped(style, printable(one.name) + (one.purpose.empty() ? "" : ": " + printable(one.purpose)),
                       field_columns);
    }
    return out;
}

/// What the program added and assumed, where the plan says nothing.
std::string taken_lines(const TakenByItself& taken, const TextStyle& style) {
    std::string out;
    if (!taken.added.empty()) {
        out += field(style, "standard",
                     "the plan has no [[case]], so the standard set is run; each case is there to find");
        out += purpose_lines(taken.added, style);
    }
    for (std::size_t i = 0; i < taken.assumed.size(); ++i)
        out += field(style, i == 0 ? "assumed" : "", taken.assumed[i]);
    if (!taken.left_out.empty()) {
        out += field(style, "left out", printable(taken.why_left_out) + "; not covered then");
        out += purpose_lines(taken.left_out, style);
    }
    return out;
}

}  // namespace

std::string brief_of(const CaseResult& result) { return case_brief(result); }

std::string firmware_text(const RunResult& run) { return firmware_line(run); }

std::string stream_text(const CaseResult& result) {
    const StreamFacts& stream = result.stream;
    return "capture " + std::string(name_of(result.grade)) + ": " + counted(stream.samples_sent, "sample", "samples") +
           " sent, " + count_text(stream.samples_received) + " came back; " +
           counted(stream.frames_bad_at_host, "bad frame", "bad frames") + " here, " +
           counted(stream.resends, "resend", "resends") + "; " + board_counters_text(stream);
}

Signal signal_of(const RunResult& run, const CaseResult& result) {
    Signal signal = run.signal;
    if (result.rate_hz) signal.rate_hz = *result.rate_hz;
    signal.rate_hz *= result.returned_per_sent;  // indices are those of the response
    return signal;
}

std::vector<std::pair<std::string, std::string>> capture_facts(const RunResult& run, const CaseResult& result) {
    std::vector<std::pair<std::string, std::string>> facts;
    const auto add = [&](const char* key, const std::string& text) { facts.emplace_back(key, text); };
    if (result.start == Start::flush)
        add("start", "flush, " + counted(result.start_samples, "zero", "zeros") + " first");
    if (result.start == Start::running) {
        add("start",
            "running, the first " + counted(result.start_samples, "sample is", "samples are") + " judged by no rule");
    }
    std::string settings;
    for (const CaseSetting& setting : result.settings)
        settings += (settings.empty() ? "" : ", ") + printable(setting.name) + " = " + std::to_string(setting.value);
    if (!settings.empty()) add("settings", settings);
    if (result.rate_hz) add("rate", rate_text(*result.rate_hz));
    const std::string time = is_about_time(result) ? time_text(result.stream) : "";
    if (!time.empty()) add("time", time);
    if (!result.attempts.empty()) {
        std::string attempts = "attempt " + std::to_string(result.attempts.size() + 1);
        if (run.attempts_allowed > 0) attempts += " of " + std::to_string(run.attempts_allowed);
        for (std::size_t i = 0; i < result.attempts.size(); ++i) {
            attempts +=
                "; attempt " + std::to_string(i + 1) + " was invalid: " + printable(result.attempts[i].invalid.problem);
        }
        add("attempts", attempts);
    }
    return facts;
}

std::string not_seen_from(std::string_view injection) {
    if (injection == "call") return "not seen there: the sampling interrupt, DMA, the converter and the analogue path";
    if (injection == "buffer") return "not seen there: DMA, the converter and the analogue path";
    if (injection == "converter") return "not seen there: the analogue path";
    return "what that point cannot show is not known to this version; the analogue path is never seen";
}

std::string start_text(const RunResult& run, const TextStyle& style) {
    std::string out = "halflsb " + printable(run.tool_version) + "\n";
    out += field(style, "plan", titled(run.plan_file, run.title));
    out += field(style, "rig", titled(run.rig_file, run.board.rig_name));
    out += field(style, "port", printable(run.board.link));
    return out;
}

std::string board_text(const RunResult& run, std::optional<double> wire_s, const TextStyle& style) {
    std::string out = board_lines(run, style);
    out += field(
        style, "cases",
        counted(static_cast<std::int64_t>(run.cases_planned.size()), "case", "cases") +
            (wire_s ? std::string(run.may_end_early ? ", at most " : ", ") + duration_text(*wire_s) + " on the wire"
                    : ", time on the wire not known"));
    return out + taken_lines(run.taken, style);
}

std::string case_text(const RunResult& run, std::size_t index, const TextStyle& style) {
    const CaseResult& result = run.cases[index];
    std::string out = case_line(run, index, style) + capture_lines(run, result, style);
    if (result.verdict == CaseVerdict::pass) return out;
    if (result.verdict == CaseVerdict::invalid) {
        out += invalid_block(result, style);
    } else {
        std::string briefs;
        for (const RuleVerdict& rule : result.rules) {
            if (rule.verdict == Verdict::pass) {
                const std::string kind(kind_name(rule.rule));
                std::string brief = rule_brief(rule);
                if (brief.rfind(kind + " ", 0) == 0) brief.erase(0, kind.size() + 1);
                briefs += wrapped(style,
                                  rule_title(rule) + ": pass" + (brief.empty() ? "" : ", " + brief) +
                                      (rule.reason.empty() ? "" : "; " + printable(rule.reason)),
                                  2);
            } else {
                out += rule_block(rule, signal_of(run, result), style);
            }
        }
        out += briefs;
    }
    // Not wrapped: a command is copied as one line.
    if (!result.rerun.empty()) out += "  rerun: " + printable(result.rerun) + "\n";
    return out;
}

std::string summary_text(const RunResult& run, const TextStyle& style) {
    const Counts counts = run.counts();
    std::string out;
    for (const std::string& warning : run.warnings) out += wrapped(style, "warning: " + printable_lines(warning), 0);
    if (run.ended_by) out += wrapped(style, "stopped: " + printable_lines(to_text(*run.ended_by)), 0);
    const auto part = [&](std::size_t count, Ink ink, const char* word) {
        return painted(style, count > 0 ? ink : Ink::plain, std::to_string(count) + " " + word);
    };
    out += part(counts.pass, Ink::good, "pass") + ", " + part(counts.fail, Ink::bad, "fail") + ", " +
           part(counts.invalid, Ink::doubtful, "invalid") + ", " + part(counts.undecided, Ink::doubtful, "undecided") +
           ", " + part(counts.not_run, Ink::doubtful, "not run") + "\n";
    if (!run.latency_verified())
        out += wrapped(style, "latency not verified: no case that ran could tell its latency", 0);
    if (run.firmware.state != FirmwareCheck::State::agrees) {
        out +=
            wrapped(style,
                    run.firmware.image_file.empty()
                        ? "firmware not verified: --image FILE compares the board's build-id with a file's"
                        : "firmware not verified: the board was not seen to run " + printable(run.firmware.image_file),
                    0);
    }
    // Not wrapped: a path is copied as one line.
    if (!run.folder.empty()) out += "run folder: " + printable(run.folder) + "\n";
    return out + wrapped(style, evidence_caution(), 0);
}

std::string judged_text(const RunResult& run, const std::string& written_by, bool own_plan, const TextStyle& style) {
    std::string out = field(
        style, "run",
        printable(run.folder) + ", captured " + printable(run.started_utc) + " by halflsb " + printable(written_by));
    out += field(style, "plan", titled(run.plan_file, run.title) + (own_plan ? ", as recorded" : ""));
    out += field(style, "rig", titled(run.rig_file, run.board.rig_name));
    out += board_lines(run, style);
    return out + field(style, "cases", counted(static_cast<std::int64_t>(run.cases_planned.size()), "case", "cases"));
}

std::string rigs_text(const std::vector<RunOfRig>& runs, const TextStyle& style) {
    std::string out = counted(static_cast<std::int64_t>(runs.size()), "rig", "rigs") + "\n";
    Table table{{{"rig", false, 0},
                 {"pass", true, 0},
                 {"fail", true, 0},
                 {"invalid", true, 0},
                 {"undecided", true, 0},
                 {"not run", true, 0},
                 {"status", true, 0},
                 {"run folder", false, 1}},
                {},
                2};
    for (const RunOfRig& run : runs) {
        const bool ran = run.exit_status.has_value();
        const auto cell = [&](std::size_t count) { return ran ? std::to_string(count) : std::string("-"); };
        table.rows.push_back({printable(run.rig_file), cell(run.counts.pass), cell(run.counts.fail),
                              cell(run.counts.invalid), cell(run.counts.undecided), cell(run.counts.not_run),
                              ran ? std::to_string(*run.exit_status) : "not run",
                              run.folder.empty() ? "-" : printable(run.folder)});
    }
    return out + laid_out(style, table);
}

std::string error_text(const Error& error, const TextStyle& style) {
    // Not wrapped: a quoted line of a file and the caret below it must stay as they are.
    return painted(style, Ink::bad, "halflsb:") + " " + printable_lines(to_text(error)) + "\n";
}

std::string cautions_text(const TextStyle& style) {
    std::string out;
    for (const std::string_view sentence : cautions()) out += wrapped(style, sentence, 0);
    return out;
}

}  // namespace halflsb
