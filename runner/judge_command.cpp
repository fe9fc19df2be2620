// judge: saved captures again, by the plan they were made for or by another. Nothing but the page of --html is written,
// no board is touched.
#include <variant>

#include "runner/choose_cases.hpp"
#include "runner/cli/exit_status.hpp"
#include "runner/commands.hpp"
#include "runner/config/plan_file.hpp"
#include "runner/judge_run.hpp"
#include "runner/open_run.hpp"
#include "runner/report/html_report.hpp"
#include "runner/report/terminal_report.hpp"
#include "runner/world/interrupt.hpp"
#include "runner/world/sha256.hpp"

namespace halflsb {
namespace {

/// The plan of the command line, or that of the record; and which of its cases are judged.
struct Question {
    Plan plan;
    std::string plan_sha256, root;
    std::vector<std::size_t> selected;
};

Outcome<Question> read_question(const RecordedRun& record, const Options& options, const Desk& desk,
                                std::vector<std::string>& problems) {
    Question question;
    const bool another_plan = !options.plan.empty();
    if (another_plan) {
        auto read = read_plan(options.plan, desk.files, {options.root.value_or(""), record.run.seed});
        if (auto* wrong = std::get_if<ReadProblems>(&read)) {
            problems = std::move(wrong->texts);
            return question;
        }
        question.plan = std::move(std::get<Plan>(read));
        auto text = desk.files.read(options.plan, largest_config_bytes);
        if (!text) return text.error();
        question.plan_sha256 = sha256_of_text(*text);
        question.root = options.root.value_or("");
    } else {
        if (options.root) {
            return Error{ErrorKind::usage, "--root", "the recorded plan finds its files in the folder of the run",
                         "leave it out, or give a PLAN"};
        }
        auto plan = read_recorded_plan(record, desk.files, problems);
        if (!plan) return plan.error();
        if (!problems.empty()) return question;
        question.plan = std::move(*plan);
    }
    const bool some = !options.case_patterns.empty() || !options.labels.empty();
    if (!another_plan && !some) {
        auto recorded = recorded_cases(record, question.plan);
        if (!recorded) return recorded.error();
        question.selected = std::move(*recorded);
        return question;
    }
    auto chosen = choose_cases(question.plan, options, {});
    if (!chosen) return chosen.error();
    question.selected = std::move(chosen->selected);
    return question;
}

std::string text_of(const Plan& plan) { return plan.parts.empty() ? "" : plan.parts.front().bytes; }

}  // namespace

int judge_command(const Options& options, const Desk& desk) {
    const auto record = read_recorded_run(desk.files, options.run);
    if (!record) return tell(record.error(), options, desk);
    if (auto whole = check_recorded_files(*record, desk.files); !whole) return tell(whole.error(), options, desk);
    std::vector<std::string> problems;
    const auto question = read_question(*record, options, desk, problems);
    if (!problems.empty()) return tell_problems(problems, desk);
    if (!question) return tell(question.error(), options, desk);
    const bool another_plan = !options.plan.empty();
    auto judgement = match_captures(*record, question->plan, another_plan, question->selected);
    if (!judgement) return tell(judgement.error(), options, desk);

    RunResult& run = judgement->run;
    if (another_plan) {
        run.plan_sha256 = question->plan_sha256;
        run.root = question->root;
        run.plan_parts = question->plan.parts;
    }
    const TextStyle style = style_of(desk.terminal, Stream::out, options.colour);
    const std::string version = std::string("halflsb ") + tool_version + "\n";
    auto written = say(desk, version + judged_text(run, run.tool_version, !another_plan, style));
    HtmlReport page(text_of(question->plan), tool_version);
    for (const Judgement::Match& match : judgement->matches) {
        CasePlots plots;
        auto result = judge_capture(*record, question->plan, match, desk.files, options.html_file ? &plots : nullptr);
        if (!result) return tell(result.error(), options, desk);
        run.cases.push_back(std::move(*result));
        page.add_case(run, plots);
        if (written) written = say(desk, case_text(run, run.cases.size() - 1, style));
    }
    if (written) written = say(desk, summary_text(run, style));
    if (desk.answer != nullptr) {
        auto document = judged_run_json(*record, run, another_plan);
        if (!document) return tell(document.error(), options, desk);
        desk.answer->add_run(std::move(*document));
    }
    if (options.html_file) {
        if (auto saved = desk.files.write(*options.html_file, page.document(run)); !saved)
            return tell(saved.error(), options, desk);
    }
    const int status = exit_status_of_judgement(run);
    if (!written) return tell(written.error(), options, desk);
    return status;
}

}  // namespace halflsb
