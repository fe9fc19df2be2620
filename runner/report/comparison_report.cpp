#include "runner/report/comparison_report.hpp"

#include <algorithm>

#include "runner/report/explanation_report.hpp"
#include "runner/report/people.hpp"
#include "runner/world/printable.hpp"

namespace halflsb {
namespace {

constexpr std::size_t field_columns = 12;  // two blanks, the longest key, a gap of two

std::string field(const TextStyle& style, std::string_view key, const std::string& value) {
    return labelled(style, "  " + std::string(key), value, field_columns);
}

std::string run_text(const ComparedRun& run) {
    return printable(run.folder) + ", " + printable(run.started_utc) +
           (run.build_id.empty() ? ", no build-id" : ", build-id " + printable(run.build_id));
}

std::string cases_text(const Comparison& comparison) {
    const auto differing = std::count_if(comparison.cases.begin(), comparison.cases.end(),
                                         [](const ComparedCase& one) { return one.differs(); });
    return counted(std::ssize(comparison.cases), "case", "cases") + " compared, " +
           (differing == 0 ? std::string("all return the same")
                           : std::to_string(differing) + (differing == 1 ? " differs" : " differ"));
}

std::string difference_text(const ComparedCase& one, const ComparedChannel& channel, bool has_lsb) {
    const std::string unit = has_lsb ? " LSB" : "";
    return count_text(channel.different) + " of " + counted(one.samples, "sample differs", "samples differ") +
           ", the first is " + count_text(channel.first_index) + ", " + rounded_text(channel.before, 9) +
           " before and " + rounded_text(channel.after, 9) + " after; on average by " + rounded_text(channel.mean, 4) +
           unit + ", rms " + rounded_text(channel.rms, 4) + unit + ", at most by " + rounded_text(channel.largest, 6) +
           unit + " at sample " + count_text(channel.largest_index);
}

std::string case_lines(const Comparison& comparison, const ComparedCase& one, const TextStyle& style) {
    std::string out;
    for (const ComparedChannel& channel : one.channels) {
        if (channel.different == 0) continue;
        const std::string which = one.channels.size() > 1 ? ", channel " + std::to_string(channel.channel) : "";
        out += wrapped(
            style,
            "case \"" + printable(one.name) + "\"" + which + ": " + difference_text(one, channel, comparison.has_lsb),
            0);
    }
    if (one.samples_before != one.samples_after) {
        out += wrapped(style,
                       "case \"" + printable(one.name) + "\": " + count_text(one.samples_before) + " samples before, " +
                           count_text(one.samples_after) + " after; as many as both have are compared",
                       0);
    }
    return out;
}

}  // namespace

std::string comparison_text(const Comparison& comparison, const TextStyle& style) {
    std::string out = field(style, "before", run_text(comparison.before));
    out += field(style, "after", run_text(comparison.after));
    out += field(style, "cases", cases_text(comparison));
    if (comparison.differs() && !comparison.before.build_id.empty() &&
        comparison.before.build_id == comparison.after.build_id)
        out += field(style, "note", "both runs are of one build: the board does not return the same twice");
    for (std::size_t i = 0; i < comparison.left_out.size(); ++i)
        out += field(style, i == 0 ? "left out" : "", comparison.left_out[i]);
    for (const ComparedCase& one : comparison.cases) out += case_lines(comparison, one, style);
    if (comparison.board_before && !comparison.board_before->channels.empty()) {
        out += "before\n";
        for (const ExplainedChannels& one : comparison.board_before->channels) out += channel_lines(one, style);
    }
    if (comparison.change && !comparison.change->channels.empty()) {
        out += "since then\n";
        for (const ExplainedChannels& one : comparison.change->channels) out += channel_lines(one, style);
    }
    for (const std::string& why : comparison.not_explained) out += wrapped(style, "not explained, " + why, 0);
    return out;
}

}  // namespace halflsb
