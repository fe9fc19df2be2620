#include "runner/report/rule_report.hpp"

#include <algorithm>
#include <cmath>
#include <variant>

#include "runner/report/people.hpp"
#include "runner/world/printable.hpp"

namespace halflsb {

namespace {

constexpr std::size_t block_indent = 2;
constexpr std::size_t inner_indent = 4;
/// A response rule may have hundreds of bands; run.json has them all.
constexpr std::size_t most_rows = 12;
/// A longer note goes below the table.
constexpr std::size_t longest_note_in_cell = 24;

std::string with_unit(const std::string& number, const std::string& unit) {
    if (unit.empty() || number == "not a number") return number;
    if (unit == "samples" && (number == "1" || number == "-1")) return number + " sample";
    return number + " " + printable(unit);
}

/// Room left as a part of the limit; what cannot be compared comes last.
double relative_margin(const JudgedFigure& figure) {
    if (figure.verdict == Verdict::fail) return -HUGE_VAL;
    if (!figure.value || !figure.limit || !figure.margin) return HUGE_VAL;
    const double size = std::fabs(*figure.limit);
    return size > 0.0 ? *figure.margin / size : *figure.margin;
}

bool note_fits_cell(const JudgedFigure& figure) {
    return !figure.note.empty() && columns_of(printable(figure.note)) <= longest_note_in_cell;
}

/// `uncertainty` stands behind the number.
std::string measured_text(const JudgedFigure& figure, const std::string& uncertainty) {
    if (figure.value) {
        const std::string number =
            figure.limit ? compared_text(*figure.value, *figure.limit).first : rounded_text(*figure.value);
        return with_unit(number + uncertainty, figure.unit);
    }
    if (note_fits_cell(figure)) return printable(figure.note);
    return figure.note.empty() ? "not measured" : "see below";
}

std::string measured_within(const JudgedFigure& figure, const TextStyle& style) {
    if (!figure.uncertainty) return measured_text(figure, "");
    return measured_text(figure, (style.unicode ? " ± " : " +- ") + rounded_text(*figure.uncertainty, 2));
}

std::string limit_with_sign(const JudgedFigure& figure, const Rule& rule, const TextStyle& style) {
    if (!figure.limit) return "none";
    std::string sign = figure.at_least ? (style.unicode ? "≥ " : ">= ") : (style.unicode ? "≤ " : "<= ");
    if (std::holds_alternative<LatencyRule>(rule.kind) && figure.name == "latency") sign = "= ";
    const std::string number =
        figure.value ? compared_text(*figure.value, *figure.limit).second : rounded_text(*figure.limit);
    return sign + with_unit(number, figure.unit);
}

std::string figure_table(const RuleVerdict& verdict, const TextStyle& style) {
    std::vector<const JudgedFigure*> shown;
    for (const JudgedFigure& figure : verdict.figures) shown.push_back(&figure);
    const std::size_t left_out = shown.size() > most_rows ? shown.size() - most_rows : 0;
    if (left_out > 0) {
        std::stable_sort(shown.begin(), shown.end(),
                         [](const auto* a, const auto* b) { return relative_margin(*a) < relative_margin(*b); });
        shown.resize(most_rows);
    }

    Table table;
    table.indent = inner_indent;
    table.columns = {
        {"figure", false, 0}, {"measured", true, 0}, {"limit", true, 0}, {"margin", true, 0}, {"", false, 0}};
    std::string stacked, notes;
    for (const JudgedFigure* figure : shown) {
        const std::string name = printable(figure->name);
        const std::string measured = measured_within(*figure, style);
        const std::string limit = limit_with_sign(*figure, verdict.rule, style);
        const std::string margin = margin_cell(*figure);
        std::string word = figure->passed() ? "" : std::string(name_of(figure->verdict));
        if (figure->value && note_fits_cell(*figure)) word += (word.empty() ? "" : ", ") + printable(figure->note);
        table.rows.push_back({name, measured, limit, margin, word});
        stacked += wrapped(style,
                           name + ": " + (figure->value ? "measured " : "") + measured + ", limit " + limit +
                               ", margin " + margin + (word.empty() ? "" : ", " + word),
                           inner_indent);
        if (!figure->note.empty() && !note_fits_cell(*figure)) {
            notes += wrapped(style, name + ": " + printable(figure->note), inner_indent);
        }
    }
    std::size_t width = 0;
    std::string out = laid_out(style, table, &width);
    if (width > static_cast<std::size_t>(style.width)) out = stacked;
    if (left_out > 0) {
        out += std::string(inner_indent, ' ') + "and " +
               counted(static_cast<std::int64_t>(left_out), "figure", "figures") + " with more room, in run.json\n";
    }
    return out + notes;
}

/// Digits after the point of a time in ms, so that neighbours differ by ten or more of the last.
int time_decimals(double rate_hz) {
    const double step_ms = 1000.0 / rate_hz;
    int decimals = 1;
    for (double digit = 1.0; digit > step_ms && decimals < 9; digit /= 10.0) ++decimals;
    return decimals;
}

std::string time_text(std::int64_t index, double rate_hz) {
    return fixed_text(1000.0 * static_cast<double>(index) / rate_hz, time_decimals(rate_hz));
}

std::string code_cell(const std::vector<Code>& codes, std::size_t i, const SampleFormat& format) {
    if (i >= codes.size()) return "-";
    return format.has_lsb() ? std::to_string(codes[i]) : rounded_text(value_of(format, codes[i]), 7);
}

std::string evidence_line(const RuleVerdict& verdict) {
    const Evidence& evidence = *verdict.evidence;
    const std::string length = std::isfinite(evidence.fixed_length_samples) && evidence.fixed_length_samples < 1e15
                                   ? count_text(static_cast<std::int64_t>(evidence.fixed_length_samples))
                                   : rounded_text(evidence.fixed_length_samples);
    return std::string(verdict.verdict == Verdict::undecided ? "undecided after " : "decided after ") +
           count_text(evidence.samples) + " of " + count_text(evidence.budget_samples) +
           " samples; for a gain on its limit a test of fixed length needs " + length;
}

Ink ink_of(Verdict verdict) {
    switch (verdict) {
        case Verdict::pass:
            return Ink::good;
        case Verdict::fail:
            return Ink::bad;
        case Verdict::undecided:
            break;
    }
    return Ink::doubtful;
}

}  // namespace

std::string rule_title(const RuleVerdict& verdict) {
    const std::string kind(kind_name(verdict.rule));
    return verdict.channel > 0 ? kind + ", channel " + std::to_string(verdict.channel) : kind;
}

std::string rule_brief(const RuleVerdict& verdict) {
    const JudgedFigure* tightest = nullptr;
    for (const JudgedFigure& figure : verdict.figures) {
        if (tightest == nullptr || relative_margin(figure) < relative_margin(*tightest)) tightest = &figure;
    }
    if (tightest == nullptr) return "";
    std::string text = printable(tightest->name) + " " + measured_text(*tightest, "");
    const bool latency_as_asked = std::holds_alternative<LatencyRule>(verdict.rule.kind) && tightest->passed();
    if (tightest->value && tightest->limit && !latency_as_asked) {
        text += tightest->at_least ? ", at least " : " of ";
        text += compared_text(*tightest->value, *tightest->limit).second;
    }
    return text;
}

std::string rule_block(const RuleVerdict& verdict, const Signal& signal, const TextStyle& style) {
    const auto* latency = std::get_if<LatencyRule>(&verdict.rule.kind);
    const bool implicit = latency != nullptr && latency->implicit;

    std::string out = std::string(block_indent, ' ') + rule_title(verdict) + ": " +
                      painted(style, ink_of(verdict.verdict), name_of(verdict.verdict)) + "\n";
    std::string asked = verdict.reference.empty()         ? ""
                        : verdict.reference == "accepted" ? "against the accepted run, "
                        : verdict.reference == "base"     ? "against the response of its base, "
                                                      : "against the " + printable(verdict.reference) + " reference, ";
    asked += implicit ? "asked of every case" : "asked at " + printable(to_text(verdict.rule.position));
    out += wrapped(style, asked, inner_indent);
    if (!verdict.reason.empty()) out += wrapped(style, printable_lines(verdict.reason), inner_indent);
    if (!verdict.figures.empty()) out += figure_table(verdict, style);
    if (verdict.evidence) out += wrapped(style, evidence_line(verdict), inner_indent);
    if (verdict.first_bad) {
        const Neighbourhood& around = *verdict.first_bad;
        std::string line = "first bad sample: " + first_bad_text(around, signal);
        if (signal.output.has_lsb()) line += "; reference and error in LSB";
        out += wrapped(style, line, inner_indent);
        out += neighbour_table(around, signal, style, inner_indent);
    }
    return out;
}

std::string neighbour_table(const Neighbourhood& around, const Signal& signal, const TextStyle& style,
                            std::size_t indent) {
    Table table;
    table.indent = indent;
    table.columns = {{"index", true, 0},    {"time ms", true, 1},   {"stimulus", true, 2},
                     {"response", true, 0}, {"reference", true, 0}, {"error", true, 0}};
    table.rows = neighbour_rows(around, signal);
    for (std::vector<std::string>& row : table.rows) {
        if (row[0] == std::to_string(around.index)) row[0].insert(0, "> ");
    }
    return laid_out(style, table);
}

std::vector<std::vector<std::string>> neighbour_rows(const Neighbourhood& around, const Signal& signal) {
    const bool lsb = signal.output.has_lsb();
    std::vector<std::vector<std::string>> cells;
    const std::size_t rows = std::max({around.stimulus.size(), around.response.size(), around.reference.size()});
    for (std::size_t i = 0; i < rows; ++i) {
        const std::int64_t index = around.first_index + static_cast<std::int64_t>(i);
        std::string reference = "-", error = "-";
        if (i < around.reference.size()) {
            const double expected = around.reference[i];
            reference = lsb ? fixed_text(expected, 3) : rounded_text(expected, 7);
            if (i < around.response.size()) {
                const double got =
                    lsb ? static_cast<double>(around.response[i]) : value_of(signal.output, around.response[i]);
                error = lsb ? fixed_text(got - expected, 3) : rounded_text(got - expected);
            }
        }
        cells.push_back({std::to_string(index), signal.rate_hz > 0.0 ? time_text(index, signal.rate_hz) : "-",
                         code_cell(around.stimulus, i, signal.input), code_cell(around.response, i, signal.output),
                         reference, error});
    }
    return cells;
}

std::string measured_cell(const JudgedFigure& figure, const TextStyle& style) { return measured_within(figure, style); }

std::string limit_cell(const JudgedFigure& figure, const Rule& rule, const TextStyle& style) {
    return limit_with_sign(figure, rule, style);
}

std::string margin_cell(const JudgedFigure& figure) {
    return figure.margin ? with_unit(rounded_text(*figure.margin), figure.unit) : "none";
}

std::string evidence_text(const RuleVerdict& verdict) { return verdict.evidence ? evidence_line(verdict) : ""; }

std::string first_bad_text(const Neighbourhood& around, const Signal& signal) {
    std::string text = count_text(around.index);
    if (signal.rate_hz > 0.0) text += ", at " + time_text(around.index, signal.rate_hz) + " ms";
    return text;
}

}  // namespace halflsb
