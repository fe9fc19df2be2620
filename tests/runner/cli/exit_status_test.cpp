#include "runner/cli/exit_status.hpp"

#include <catch2/catch.hpp>
#include <iterator>

#include "tests/runner/report/sample_run.hpp"
#include "tests/support/generated_part.hpp"

using namespace halflsb;

namespace {

/// A run whose cases came out so; `not_run` more were planned.
RunResult run_of(const std::vector<CaseVerdict>& verdicts, std::size_t not_run = 0) {
    RunResult run;
    for (const CaseVerdict verdict : verdicts) {
        CaseResult result;
        result.verdict = verdict;
        run.cases.push_back(result);
    }
    run.cases_planned.resize(verdicts.size() + not_run);
    return run;
}

RunResult ended(RunResult run, ErrorKind kind) {
    run.ended_by = Error{kind, "", "it ended", ""};
    return run;
}

constexpr auto pass = CaseVerdict::pass, fail = CaseVerdict::fail, invalid = CaseVerdict::invalid,
               undecided = CaseVerdict::undecided;

}  // namespace

TEST_CASE("exit status: of a whole run, 1 outranks 3 outranks 2 outranks 0", "[cli]") {
    CHECK(exit_status_of(run_of({pass})) == 0);
    CHECK(exit_status_of(run_of({pass, pass, pass})) == 0);
    CHECK(exit_status_of(run_of({pass, undecided})) == 2);
    CHECK(exit_status_of(run_of({pass, undecided, invalid})) == 3);
    CHECK(exit_status_of(run_of({invalid})) == 3);
    CHECK(exit_status_of(run_of({invalid, undecided, fail, pass})) == 1);
    CHECK(exit_status_of(run_of({fail})) == 1);
}

TEST_CASE("exit status: a run that the bench ended is 3, or 1 when a rule had failed before", "[cli]") {
    CHECK(exit_status_of(ended(run_of({}, 5), ErrorKind::bench)) == 3);
    CHECK(exit_status_of(ended(run_of({pass, pass}, 1), ErrorKind::bench)) == 3);
    CHECK(exit_status_of(ended(run_of({undecided}, 1), ErrorKind::bench)) == 3);
    CHECK(exit_status_of(ended(run_of({fail}, 1), ErrorKind::bench)) == 1);
    // Every case had been judged, and then the bench failed: still not a pass.
    CHECK(exit_status_of(ended(run_of({pass}), ErrorKind::bench)) == 3);
}

TEST_CASE("exit status: an interruption, a full disk and a defect outrank every verdict", "[cli]") {
    for (const auto& verdicts : {std::vector<CaseVerdict>{}, {pass}, {fail}, {invalid}, {undecided}}) {
        CHECK(exit_status_of(ended(run_of(verdicts, 1), ErrorKind::interrupted)) == 130);
        CHECK(exit_status_of(ended(run_of(verdicts, 1), ErrorKind::output)) == 73);
        CHECK(exit_status_of(ended(run_of(verdicts, 1), ErrorKind::defect)) == 70);
        CHECK(exit_status_of(ended(run_of(verdicts, 1), ErrorKind::input)) == 65);
        CHECK(exit_status_of(ended(run_of(verdicts, 1), ErrorKind::usage)) == 64);
    }
}

TEST_CASE("exit status: cases that did not run for no reason are never a pass", "[cli]") {
    CHECK(exit_status_of(run_of({pass}, 1)) == 70);
    CHECK(exit_status_of(run_of({undecided}, 1)) == 70);
    CHECK(exit_status_of(run_of({}, 1)) == 70);
    CHECK(exit_status_of(run_of({fail}, 1)) == 1);
    CHECK(exit_status_of(run_of({})) == 64);  // no case selected
}

TEST_CASE("exit status: of an error alone", "[cli]") {
    const auto status = [](ErrorKind kind) { return exit_status_of(Error{kind, "", "", ""}); };
    CHECK(status(ErrorKind::usage) == 64);
    CHECK(status(ErrorKind::input) == 65);
    CHECK(status(ErrorKind::bench) == 3);
    CHECK(status(ErrorKind::output) == 73);
    CHECK(status(ErrorKind::interrupted) == 130);
    CHECK(status(ErrorKind::defect) == 70);
}

TEST_CASE("exit status: the table has every status once, ascending, each with a cause", "[cli]") {
    std::vector<int> numbers;
    for (const ExitStatus& status : exit_statuses()) {
        numbers.push_back(status.number);
        CHECK_FALSE(status.meaning.empty());
        CHECK_FALSE(status.causes.empty());
        CHECK_FALSE(status.advice.empty());
    }
    CHECK(numbers == std::vector<int>{0, 1, 2, 3, 64, 65, 70, 73, 130});
}

TEST_CASE("exit status: of several runs in one call the worst, an interruption before all", "[cli]") {
    CHECK(exit_status_of_all({0, 0}) == 0);
    CHECK(exit_status_of_all({0, 2}) == 2);
    CHECK(exit_status_of_all({2, 3, 0}) == 3);
    CHECK(exit_status_of_all({3, 1, 2}) == 1);
    CHECK(exit_status_of_all({1, 65}) == 65);
    CHECK(exit_status_of_all({65, 70}) == 70);
    CHECK(exit_status_of_all({1, 73}) == 73);
    CHECK(exit_status_of_all({73, 130}) == 130);
    CHECK(exit_status_of_all({}) == 70);
    for (const int status : {130, 73, 70}) CHECK(stops_everything(status));
    for (const int status : {0, 1, 2, 3, 64, 65}) CHECK_FALSE(stops_everything(status));
}

TEST_CASE("exit status: of captures judged again, what was never captured is the bench's", "[cli]") {
    CHECK(exit_status_of_judgement(run_of({pass, pass})) == 0);
    CHECK(exit_status_of_judgement(run_of({pass, undecided})) == 2);
    CHECK(exit_status_of_judgement(run_of({pass, invalid, undecided})) == 3);
    CHECK(exit_status_of_judgement(run_of({pass}, 1)) == 3);
    CHECK(exit_status_of_judgement(ended(run_of({pass}, 1), ErrorKind::interrupted)) == 3);
    CHECK(exit_status_of_judgement(ended(run_of({fail, pass}, 1), ErrorKind::interrupted)) == 1);
    CHECK(exit_status_of_judgement(run_of({}, 1)) == 3);
    CHECK(exit_status_of_judgement(run_of({})) == 64);
}

TEST_CASE("exit status: docs/exit-status.md holds the table", "[cli][docs]") {
    test::check_generated_part("exit-status.md", "exit status", exit_status_reference());
}
