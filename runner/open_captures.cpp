#include "runner/open_captures.hpp"

#include "runner/choose_cases.hpp"

namespace halflsb {
namespace {

Outcome<std::vector<std::size_t>> selected_cases(const OwnRun& own, const Options& options) {
    if (options.case_patterns.empty() && options.labels.empty()) return recorded_cases(own.record, own.plan);
    // --for is the time of the search here.
    Options chosen_by = options;
    chosen_by.time_limit_s.reset();
    auto chosen = choose_cases(own.plan, chosen_by, {});
    if (!chosen) return chosen.error();
    return std::move(chosen->selected);
}

}  // namespace

Outcome<OpenedCaptures> open_captures(const std::string& folder, const Options& options, const Files& files,
                                      std::vector<std::string>& problems) {
    auto own = read_own_run(folder, files, problems);
    if (!own) return own.error();
    OpenedCaptures opened{std::move(*own), {}};
    if (!problems.empty()) return opened;
    const auto selected = selected_cases(opened.own, options);
    if (!selected) return selected.error();
    auto judgement = match_captures(opened.own.record, opened.own.plan, false, *selected);
    if (!judgement) return judgement.error();
    // Moving a vector leaves its elements where they are.
    opened.judgement = std::move(*judgement);
    return opened;
}

Outcome<OpenedCaptures> open_fresh_captures(const std::string& folder, const Files& files) {
    std::vector<std::string> problems;
    auto opened = open_captures(folder, {}, files, problems);
    if (opened && !problems.empty()) return Error{ErrorKind::defect, folder, problems.front(), ""};
    return opened;
}

}  // namespace halflsb
