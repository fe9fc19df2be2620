// report.html: a run as one page for people. One file, nothing is loaded from anywhere.
//
// The page allows itself no script and no style but its own, named by their hash: text of a plan or a board that
// slipped through could still not run. Of plots there is a bounded amount, so that a plan of ten thousand cases has a
// page that opens: failed and undecided cases have a share of their own.
#pragma once

#include <cstddef>
#include <string>
#include <vector>

#include "oracle/judge/plots.hpp"
#include "runner/world/result.hpp"

namespace halflsb {

class HtmlReport {
public:
    /// `plan_text`: of the plan file, which rules are linked to; left out where it is longer than 128 KiB. `judged_by`:
    /// the version of halflsb that judges the captures of an earlier run again; "" of a run as it happens.
    explicit HtmlReport(std::string plan_text, std::string judged_by = "");
    /// The last one of run.cases.
    void add_case(const RunResult& run, const CasePlots& plots);
    /// The whole page, of all cases that were added.
    std::string document(const RunResult& run) const;

private:
    std::string plots_of(const CaseResult& result, const CasePlots& plots);

    std::string plan_text_, judged_by_;
    struct Part {
        CaseVerdict verdict;
        std::string html;
    };
    std::vector<Part> cases_;
    std::vector<std::string> rows_;
    std::size_t plots_ = 0;
    std::size_t bytes_of_passed_ = 0, bytes_of_others_ = 0;
};

}  // namespace halflsb
