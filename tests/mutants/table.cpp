// The table of docs/mutants.md: every pair of a fault and a filter, detected, explained, and held against what was
// expected of it.
//
//   mutants_table                  prints the table and what it took
//   mutants_table --only WORDS     of pairs whose fault and filter have these words, with all that explain said
//   mutants_table --compare FILE   fails where FILE does not hold the same table
//   mutants_table --write FILE     writes it there, between its two marks
#include <algorithm>
#include <cstdio>
#include <fstream>
#include <map>
#include <sstream>

#include "oracle/explain/board_model.hpp"
#include "tests/mutants/pairs.hpp"
#include "tests/mutants/trial.hpp"

using namespace halflsb;
using namespace halflsb::mutants;

namespace {

/// Members of a class that are still an answer.
constexpr std::size_t most_members = 4;

enum class Answer { unobservable, missed, named, equal, too_wide, among_several, unknown, wrong };

const char* name_of_answer(Answer answer) {
    switch (answer) {
        case Answer::unobservable:
            return "unobservable";
        case Answer::missed:
            return "NOT DETECTED";
        case Answer::named:
            return "named";
        case Answer::equal:
            return "equal in bits";
        case Answer::too_wide:
            return "in a class of more than 4";
        case Answer::among_several:
            return "among several";
        case Answer::unknown:
            return "unknown";
        case Answer::wrong:
            break;
    }
    return "WRONG";
}

struct Row {
    Mutant mutant;
    Answer answer = Answer::unknown;
    std::string seen_by, said;
    double seconds = 0.0;
};

/// What is sent to the boards of one filter, and what the right one returns.
struct Bench {
    explicit Bench(const FilterUnderTest& filter) : under_test(filter), plan(plan_of(filter)) {
        right = responses_of(*filter.board(Fault::none), plan);
        further = further_stimuli(plan.signal);
        right_further = further_responses(*filter.board(Fault::none), further);
    }
    /// Bit-exact to its twin, and fails no rule.
    std::string why_not_right() const {
        const Explained found = explained(plan, right);
        if (found.finding.kind != FindingKind::as_declared)
            return "the right board is " + std::string(name_of(found.finding.kind));
        return first_failure(plan, right);
    }

    const FilterUnderTest& under_test;
    Plan plan;
    std::vector<std::vector<Code>> right, further, right_further;
};

std::string text_of(const EquivalenceClass& each) {
    std::string text;
    for (const Candidate& member : each.members) text += (text.empty() ? "" : " = ") + member.hypothesis.what();
    return text;
}

bool has_expected(const EquivalenceClass& each, const std::string& expected) {
    return std::any_of(each.members.begin(), each.members.end(),
                       [&](const Candidate& member) { return is_expected(expected, member.hypothesis.what()); });
}

/// What was said, computed, against what the board does to stimuli that explain has not seen.
bool is_equal_in_bits(const Bench& bench, const Candidate& said, Fault fault) {
    if (bench.plan.signal.channels > 1) return false;
    const auto model = BoardModel::make(said.hypothesis.board, bench.plan.signal);
    if (model == nullptr) return false;
    const auto board = bench.under_test.board(fault);
    // Each from what the one before left, as far as a reset lets it.
    const auto returned = further_responses(*board, bench.further);
    std::vector<Code> out;
    for (std::size_t i = 0; i < returned.size(); ++i) {
        out.clear();
        model->begin_case(Start::reset, 0);
        model->process(bench.further[i], out);
        const std::size_t count = std::min(out.size(), returned[i].size());
        if (!std::equal(out.begin(), out.begin() + static_cast<std::ptrdiff_t>(count), returned[i].begin()))
            return false;
    }
    return true;
}

Answer judged(const Bench& bench, const Mutant& mutant, const Finding& finding) {
    const auto& classes = finding.search.classes;
    if (classes.empty()) return Answer::unknown;
    if (has_expected(classes.front(), mutant.expected))
        return classes.front().members.size() <= most_members ? Answer::named : Answer::too_wide;
    for (const EquivalenceClass& each : classes)
        if (has_expected(each, mutant.expected)) return Answer::among_several;
    return is_equal_in_bits(bench, classes.front().members.front(), mutant.fault) ? Answer::equal : Answer::wrong;
}

Row tried(const Bench& bench, const Mutant& mutant, bool is_loud) {
    Row row{mutant, Answer::unknown, "", "", 0.0};
    const auto board = bench.under_test.board(mutant.fault);
    const auto returned = responses_of(*board, bench.plan);
    const bool is_different = returned != bench.right;
    if (!is_different && further_responses(*board, bench.further) == bench.right_further) {
        row.answer = Answer::unobservable;
        if (const std::string failure = first_failure(bench.plan, returned); !failure.empty())
            row.answer = Answer::wrong;
        return row;
    }
    row.seen_by = first_failure(bench.plan, returned);
    if (row.seen_by.empty()) {
        row.answer = Answer::missed;
        return row;
    }
    const Explained found = explained(bench.plan, returned);
    row.seconds = found.seconds;
    row.answer = judged(bench, mutant, found.finding);
    const auto& classes = found.finding.search.classes;
    if (!classes.empty()) row.said = classes.front().members.front().hypothesis.what();
    if (is_loud) {
        std::printf("%s, %s: %s, %.2f s, seen by %s\n  expected %s\n", mutant.id.c_str(), mutant.filter.c_str(),
                    name_of_answer(row.answer), row.seconds, row.seen_by.c_str(), mutant.expected.c_str());
        for (const EquivalenceClass& each : classes)
            std::printf("  class of %zu: %s\n", each.members.size(), text_of(each).c_str());
        if (const auto& nearest = found.finding.search.nearest; classes.empty() && nearest)
            std::printf("  nearest: %s, wrong at case %d, %lld\n", nearest->hypothesis.what().c_str(),
                        nearest->fit.wrong_case, static_cast<long long>(nearest->fit.wrong_index));
        std::fflush(stdout);
    }
    return row;
}

struct Counts {
    int pairs = 0, observable = 0, detected = 0;
    std::map<Answer, int> of;
};

Counts counted(const std::vector<Row>& rows) {
    Counts counts;
    for (const Row& row : rows) {
        ++counts.pairs;
        ++counts.of[row.answer];
        if (row.answer == Answer::unobservable) continue;
        ++counts.observable;
        counts.detected += row.answer != Answer::missed;
    }
    return counts;
}

std::string table_of(const std::vector<Row>& rows) {
    std::ostringstream text;
    Counts counts = counted(rows);
    const int right = counts.of[Answer::named] + counts.of[Answer::equal];
    text << "| | |\n|---|---|\n";
    text << "| pairs of a fault and a filter | " << counts.pairs << " |\n";
    text << "| of these unobservable: the same bits to every stimulus that was tried | "
         << counts.of[Answer::unobservable] << " |\n";
    text << "| observable | " << counts.observable << " |\n";
    text << "| detected by the standard set | " << counts.detected << " |\n";
    text << "| cause named right from the capture alone | " << right << " ("
         << 100 * right / std::max(counts.observable, 1) << " %) |\n";
    text << "| of these in other words, equal in bits | " << counts.of[Answer::equal] << " |\n";
    text << "| right, in a class of more than 4 | " << counts.of[Answer::too_wide] << " |\n";
    text << "| right, but another cause stands first | " << counts.of[Answer::among_several] << " |\n";
    text << "| unknown | " << counts.of[Answer::unknown] << " |\n";
    text << "| wrong | " << counts.of[Answer::wrong] << " |\n\n";
    text << "| fault | filter | first seen by | answer | what explain says |\n|---|---|---|---|---|\n";
    for (const Row& row : rows) {
        text << "| " << row.mutant.id << " | " << row.mutant.filter << " | " << row.seen_by << " | "
             << name_of_answer(row.answer) << " | " << row.said << " |\n";
    }
    return text.str();
}

const std::string first_mark = "<!-- table: begin -->\n", last_mark = "<!-- table: end -->\n";

/// Of the file, without what stands between the marks, which is put in `old`.
bool read_page(const std::string& path, std::string& head, std::string& old, std::string& tail) {
    std::ifstream file(path, std::ios::binary);
    const std::string all((std::istreambuf_iterator<char>(file)), std::istreambuf_iterator<char>());
    const auto begin = all.find(first_mark), end = all.find(last_mark);
    if (begin == std::string::npos || end == std::string::npos) return false;
    head = all.substr(0, begin + first_mark.size());
    old = all.substr(begin + first_mark.size(), end - begin - first_mark.size());
    tail = all.substr(end);
    return true;
}

void print_times(const std::vector<Row>& rows) {
    std::vector<double> seconds;
    for (const Row& row : rows)
        if (row.seconds > 0.0) seconds.push_back(row.seconds);
    if (seconds.empty()) return;
    std::sort(seconds.begin(), seconds.end());
    std::printf("an explanation took %.3f s in the median and %.2f s at most; %zu of them\n",
                seconds[seconds.size() / 2], seconds.back(), seconds.size());
}

}  // namespace

int main(int argc, char** argv) {
    const std::string mode = argc > 1 ? argv[1] : "", value = argc > 2 ? argv[2] : "";
    const bool is_loud = mode == "--only";
    std::vector<Row> rows;
    std::map<std::string, std::unique_ptr<Bench>> benches;
    bool is_right = true;
    for (const Mutant& mutant : every_mutant()) {
        if (is_loud && (mutant.id + " " + mutant.filter).find(value) == std::string::npos) continue;
        auto& bench = benches[mutant.filter];
        if (bench == nullptr) {
            bench = std::make_unique<Bench>(filter_named(mutant.filter));
            if (const std::string why = bench->why_not_right(); !why.empty()) {
                std::printf("%s: %s\n", mutant.filter.c_str(), why.c_str());
                is_right = false;
            }
        }
        rows.push_back(tried(*bench, mutant, is_loud));
    }
    const std::string table = table_of(rows);
    print_times(rows);
    Counts counts = counted(rows);
    if (const int bad = counts.of[Answer::wrong] + counts.of[Answer::missed]; bad > 0) {
        std::printf("%d pairs are explained wrongly or not detected\n", bad);
        is_right = false;
    }
    if (mode == "--compare" || mode == "--write") {
        std::string head, old, tail;
        if (!read_page(value, head, old, tail)) {
            std::printf("%s has no place for the table\n", value.c_str());
            return 1;
        }
        if (mode == "--write") std::ofstream(value, std::ios::binary) << head << "\n" << table << "\n" << tail;
        if (mode == "--compare" && old != "\n" + table + "\n") {
            std::printf("%s%s is not this table: look at what changed, and write it anew with --write\n", table.c_str(),
                        value.c_str());
            return 1;
        }
    } else {
        std::printf("%s", table.c_str());
    }
    return is_right ? 0 : 1;
}
