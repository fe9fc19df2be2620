#include "runner/report/explanation_report.hpp"

#include <algorithm>
#include <vector>

#include "oracle/explain/said_words.hpp"
#include "runner/report/people.hpp"
#include "runner/world/printable.hpp"

namespace halflsb {
namespace {

constexpr std::size_t field_columns = 13;  // two blanks, the longest key, a gap of two
constexpr std::size_t most_members_told = 8;
constexpr std::size_t most_coefficients_told = 12;
/// A rounding of the output leaves 0.29 LSB rms, one of each of ten products 0.91.
constexpr double linear_below_lsb = 1.0;

std::string field(const TextStyle& style, std::string_view key, const std::string& value) {
    return labelled(style, "  " + std::string(key), value, field_columns);
}

std::string channels_text(const std::vector<int>& channels) {
    std::string text = channels.size() == 1 ? "channel " : "channels ";
    for (std::size_t i = 0; i < channels.size(); ++i)
        text += (i == 0 ? "" : i + 1 == channels.size() ? " and " : ", ") + std::to_string(channels[i]);
    return text;
}

std::string amount_text(const ExplainedChannels& one) {
    return counted(one.samples, "sample", "samples") + " of " +
           counted(static_cast<std::int64_t>(one.cases.size()), "case", "cases");
}

/// "sample 40 of case "step""
std::string wrong_text(const ExplainedChannels& one, const CaptureFit& fit) {
    const auto at = static_cast<std::size_t>(fit.wrong_case);
    const std::string name = at < one.cases.size() ? printable(one.cases[at]) : std::string("?");
    return "sample " + count_text(fit.wrong_index) + " of case \"" + name + "\"";
}

/// Where the plan says what the board does otherwise.
std::string where_text(const ExplainedChannels& one, const Hypothesis& hypothesis) {
    std::string text;
    for (const Change& change : hypothesis.changes) {
        std::string place;
        if (change.slot == Slot::filter || change.slot == Slot::arithmetic) {
            place = "stage " + std::to_string(change.stage + 1);
            if (change.stage < one.stages.size()) place += ", " + printable(to_text(one.stages[change.stage]));
        } else if (change.slot == Slot::input) {
            place = "between the wire and the filter";
        } else if (change.slot == Slot::output) {
            place = "between the filter and the wire";
        } else if (change.slot == Slot::passage) {
            place = "in the stream around the filter";
        } else if (change.slot == Slot::channels) {
            place = "between the channels";
        } else {
            place = "at the reset";
        }
        if (text.find(place) == std::string::npos) text += (text.empty() ? "" : "; ") + place;
    }
    return text;
}

std::string look_at_text(const Hypothesis& hypothesis) {
    std::string text;
    for (const Change& change : hypothesis.changes)
        if (text.find(change.look_at) == std::string::npos) text += (text.empty() ? "" : "; ") + change.look_at;
    return text;
}

const Hypothesis& first_of(const EquivalenceClass& one) { return one.members.front().hypothesis; }

std::string headline(const ExplainedChannels& one) {
    const SearchResult& search = one.finding.search;
    switch (one.finding.kind) {
        case FindingKind::as_declared:
            if (one.is_since_a_run) return "as before";
            return one.finding.is_inferred ? "its arithmetic is found" : "as declared";
        case FindingKind::found:
            return first_of(search.classes.front()).what();
        case FindingKind::several:
            return counted(static_cast<std::int64_t>(search.classes.size()), "cause", "causes") +
                   " fit, these captures do not tell which";
        case FindingKind::unknown:
            return "unknown";
        case FindingKind::no_twin:
            break;
    }
    return "nothing to compare with";
}

Ink ink_of(FindingKind kind) {
    if (kind == FindingKind::as_declared) return Ink::good;
    return kind == FindingKind::found ? Ink::bad : Ink::doubtful;
}

std::string declared_text(const ExplainedChannels& one) {
    const CaptureFit& fit = one.finding.search.declared.fit;
    const std::string as = one.is_since_a_run        ? "as it was before"
                           : one.finding.is_inferred ? "in the nearest arithmetic that was found for it"
                                                     : "as the plan declares it";
    return as + " the board would first differ at " + wrong_text(one, fit);
}

std::string members_text(const EquivalenceClass& one) {
    std::string text;
    for (std::size_t i = 1; i < one.members.size() && i <= most_members_told; ++i)
        text += (i == 1 ? "" : "; or ") + one.members[i].hypothesis.what();
    if (one.members.size() > most_members_told + 1)
        text += "; and " + std::to_string(one.members.size() - 1 - most_members_told) + " more";
    return text;
}

std::string cause_lines(const ExplainedChannels& one, const EquivalenceClass& cause, const TextStyle& style) {
    const Hypothesis& first = first_of(cause);
    std::string out = field(style, "where", where_text(one, first));
    if (cause.members.size() > 1)
        out += field(style, "equivalent",
                     members_text(cause) +
                         ": no stimulus that was tried tells them apart with "
                         "this filter");
    return out + field(style, "look at", look_at_text(first));
}

std::string evidence_lines(const ExplainedChannels& one, const TextStyle& style) {
    const Finding& finding = one.finding;
    const SearchResult& search = finding.search;
    std::string out;
    const std::string all = "all " + amount_text(one) + ", bit for bit";
    if (finding.kind == FindingKind::as_declared) {
        out += field(style, "evidence",
                     (one.is_since_a_run    ? "the board of the run before reproduces "
                      : finding.is_inferred ? "the words below reproduce "
                                            : "what the plan declares reproduces ") +
                         all);
    } else if (finding.kind == FindingKind::found) {
        out += field(style, "evidence", "reproduces " + all + "; " + declared_text(one));
    } else if (finding.kind == FindingKind::several) {
        out += field(style, "evidence", "each reproduces " + all + "; " + declared_text(one));
    } else {
        out += field(style, "evidence",
                     "nothing that was tried reproduces the " + amount_text(one) + "; " + declared_text(one));
    }
    if (search.nearest) {
        out += field(style, finding.kind == FindingKind::unknown ? "nearest" : "next best",
                     search.nearest->hypothesis.what() + ": goes wrong at " + wrong_text(one, search.nearest->fit) +
                         (finding.kind == FindingKind::unknown ? "; it is not the cause" : ""));
    }
    if (search.tried > 0 || search.was_cut) {
        out += field(
            style, "tried",
            counted(search.tried, "board", "boards") + (search.was_cut ? "; the search was ended before its end" : ""));
    }
    return out;
}

std::string words_text(const FilterChain& chain) {
    std::string text;
    for (std::size_t i = 0; i < chain.size(); ++i) {
        for (const std::string& word : said_words(chain[i])) {
            const std::string stage = chain.size() > 1 ? " (stage " + std::to_string(i + 1) + ")" : "";
            text += (text.empty() ? "" : ", ") + word + stage;
        }
    }
    return text.empty() ? "nothing but what is taken when left out" : text;
}

std::string lsb_text(double lsb) { return rounded_text(lsb, 4) + " LSB"; }

/// What was seen, for who has to go on by hand.
std::string symptom_lines(const ExplainedChannels& one, const TextStyle& style) {
    const auto& seen = one.finding.symptoms;
    if (!seen) return "";
    std::string text = count_text(seen->differing) + " of " +
                       counted(seen->samples, "sample differs", "samples differ") + "; on average by " +
                       lsb_text(seen->mean_lsb);
    if (seen->mean_above_lsb && seen->mean_below_lsb) {
        text += " (" + lsb_text(*seen->mean_above_lsb) + " where the output is positive, " +
                lsb_text(*seen->mean_below_lsb) + " where it is negative)";
    }
    text += ", rms " + lsb_text(seen->rms_lsb);
    const auto at = static_cast<std::size_t>(seen->largest_case);
    if (seen->largest_case >= 0 && at < one.cases.size()) {
        text += ", at most by " + lsb_text(seen->largest_lsb) + " at sample " + count_text(seen->largest_index) +
                " of case \"" + printable(one.cases[at]) + "\"";
    }
    if (seen->lag_samples != 0) {
        text += "; behind the first difference it fits best " +
                counted(std::abs(seen->lag_samples), "sample", "samples") +
                (seen->lag_samples > 0 ? " late, " : " early, ") + rounded_text(seen->equal_at_lag_percent, 3) +
                " % equal then";
    }
    if (seen->zero_bits > seen->declared_zero_bits)
        text += "; the lowest " + counted(seen->zero_bits, "bit is", "bits are") + " always 0";
    if (seen->block_samples > 0) {
        text += "; nine of ten differences are at place " + std::to_string(seen->block_place) + " of each " +
                std::to_string(seen->block_samples) + " samples";
    }
    if (seen->longest_held_samples > 1) {
        text += "; the output stands still for " + count_text(seen->longest_held_samples) +
                " samples while the declared one moves";
    }
    return field(style, "seen", text);
}

std::string coefficients_text(const LinearFit& fit) {
    std::string text;
    const auto add = [&](const char* letter, const std::vector<double>& numbers, std::size_t first) {
        for (std::size_t k = first; k < numbers.size(); ++k)
            text += (text.empty() ? "" : ", ") + (letter + std::to_string(k)) + " = " + rounded_text(numbers[k], 6);
    };
    add("b", fit.b, 0);
    add("a", fit.a, 1);
    return text;
}

/// Of an unknown board: whether it is a linear filter, and which.
std::string linear_line(const ExplainedChannels& one, const TextStyle& style) {
    const auto& fit = one.finding.linear;
    if (!fit) return "";
    const std::size_t count = fit->b.size() + fit->a.size() - 1;
    std::string text = "the nearest linear filter of as many coefficients as the plan has leaves " +
                       lsb_text(fit->residual_lsb) + " rms of " + counted(fit->samples, "sample", "samples") +
                       (fit->residual_lsb < linear_below_lsb ? ": the board is that filter and a rounding"
                                                             : ": the board is no such filter");
    text += "; at rest " + lsb_text(fit->offset_lsb);
    if (count <= most_coefficients_told) text += "; " + coefficients_text(*fit);
    return field(style, "linear", text);
}

std::string answer_text(const AskedQuestion& question) {
    std::string text;
    for (const AskedQuestion::RuledOut& cause : question.ruled_out)
        text += (text.empty() ? "" : "; ") + channels_text(cause.channels) + ": " + cause.what;
    return question.what + (text.empty() ? ": the answer rules out nothing" : ": the answer rules out " + text) + "; " +
           counted(static_cast<std::int64_t>(question.left), "cause", "causes") + " left";
}

std::string asked_lines(const Explanation& explanation, const TextStyle& style) {
    std::string out;
    for (const AskedRun& run : explanation.asked) {
        out += field(style, "asked", "the board, recorded in " + printable(run.folder));
        for (std::size_t i = 0; i < run.questions.size(); ++i)
            out += field(style, std::to_string(i + 1), answer_text(run.questions[i]));
    }
    const bool is_open = std::any_of(explanation.channels.begin(), explanation.channels.end(),
                                     [](const auto& one) { return one.finding.kind == FindingKind::several; });
    if (is_open && explanation.asked.empty() && explanation.not_asked.empty())
        out += field(style, "next", "--rig RIG asks the board what these captures leave open");
    if (!explanation.not_asked.empty()) out += field(style, "not asked", explanation.not_asked);
    return out;
}

}  // namespace

std::string channel_lines(const ExplainedChannels& one, const TextStyle& style) {
    const Finding& finding = one.finding;
    std::string out =
        wrapped(style, channels_text(one.channels) + ": " + painted(style, ink_of(finding.kind), headline(one)), 0);
    if (finding.kind == FindingKind::no_twin) {
        if (finding.missing)
            out += field(style, "missing", finding.missing->problem) + field(style, "remedy", finding.missing->remedy);
        return out;
    }
    const auto& classes = finding.search.classes;
    if (finding.kind == FindingKind::found) out += cause_lines(one, classes.front(), style);
    for (std::size_t i = 0; finding.kind == FindingKind::several && i < classes.size(); ++i) {
        out +=
            field(style, "cause " + std::to_string(i + 1),
                  first_of(classes[i]).what() + (i == 0 ? "" : "; told from the first by " + classes[i].separated_by));
        out += cause_lines(one, classes[i], style);
    }
    out += evidence_lines(one, style) + symptom_lines(one, style) + linear_line(one, style);
    if (finding.kind == FindingKind::as_declared && finding.is_inferred)
        out += field(style, "to paste", "into the plan, which leaves it open") +
               arithmetic_lines(finding.search.declared.hypothesis.board.filter);
    return out;
}

std::string arithmetic_lines(const FilterChain& chain) {
    std::vector<std::vector<std::string>> stages;
    for (const FilterStage& stage : chain) stages.push_back(said_words(stage));
    const auto table = [](const std::string& header, const std::vector<std::string>& words) {
        std::string text = header + "\n";
        for (const std::string& word : words) text += word + "\n";
        return text;
    };
    const bool are_equal =
        std::all_of(stages.begin(), stages.end(), [&](const auto& words) { return words == stages.front(); });
    if (are_equal && !stages.empty()) return table("[arithmetic]", stages.front());
    std::string text;
    for (std::size_t i = 0; i < stages.size(); ++i)
        text += table("[filter.arithmetic]  # of stage " + std::to_string(i + 1), stages[i]);
    return text;
}

std::string explanation_text(const Explanation& explanation, const TextStyle& style) {
    std::string out = field(style, "run", printable(explanation.folder));
    out += field(
        style, "plan",
        printable(explanation.plan_file) + (explanation.title.empty() ? "" : ", " + printable(explanation.title)));
    for (std::size_t i = 0; i < explanation.left_out.size(); ++i)
        out += field(style, i == 0 ? "left out" : "", explanation.left_out[i]);
    out += asked_lines(explanation, style);
    for (const ExplainedChannels& one : explanation.channels) out += channel_lines(one, style);
    return out;
}

std::string explained_lines(const Explanation& explanation, const TextStyle& style) {
    std::string out;
    for (const ExplainedChannels& one : explanation.channels) {
        const Finding& finding = one.finding;
        std::string sentence;
        if (finding.kind == FindingKind::found) {
            const EquivalenceClass& cause = finding.search.classes.front();
            sentence = headline(one) + " (" + where_text(one, first_of(cause)) + "); it reproduces all " +
                       amount_text(one) + ", bit for bit; look at " + look_at_text(first_of(cause));
            if (cause.members.size() > 1)
                sentence += "; " + counted(static_cast<std::int64_t>(cause.members.size()) - 1, "other", "others") +
                            " would return the same";
        } else if (finding.kind == FindingKind::several) {
            sentence = headline(one) + ": " + first_of(finding.search.classes.front()).what() + ", or " +
                       first_of(finding.search.classes[1]).what() + "; halflsb explain with --rig asks the board which";
        } else if (finding.kind == FindingKind::unknown) {
            sentence = "no change of filter, arithmetic, codes or stream that was tried reproduces the response";
        } else if (finding.kind == FindingKind::no_twin) {
            continue;
        } else if (finding.is_inferred) {
            sentence = "the board computes with " + words_text(finding.search.declared.hypothesis.board.filter) +
                       ", which reproduces all " + amount_text(one) +
                       ", bit for bit; rules that fail do so in this arithmetic";
        } else {
            sentence = "the declared arithmetic reproduces all " + amount_text(one) +
                       ", bit for bit; rules that fail do so because of it, not because the board does otherwise";
        }
        out += wrapped(style, "explained, " + channels_text(one.channels) + ": " + sentence, 0);
    }
    return out;
}

}  // namespace halflsb
