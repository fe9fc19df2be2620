// accept: keeps a good run as the baseline of its plan's `unchanged` rules. docs/release.md tells the whole story.
#include <variant>

#include "runner/accept_run.hpp"
#include "runner/commands.hpp"
#include "runner/config/baseline_file.hpp"
#include "runner/judge_run.hpp"
#include "runner/open_run.hpp"
#include "runner/report/people.hpp"
#include "runner/report/terminal_report.hpp"
#include "runner/world/interrupt.hpp"
#include "runner/world/printable.hpp"

namespace halflsb {
namespace {

/// --root, else that of the run, else the folder of the plan as it was given.
std::string root_of(const RecordedRun& record, const Options& options) {
    if (options.root) return *options.root;
    if (!record.run.root.empty()) return record.run.root;
    const std::string& plan = record.run.plan_file;
    const std::size_t slash = plan.rfind('/');
    if (slash == std::string::npos) return ".";
    return slash == 0 ? "/" : plan.substr(0, slash);
}

/// What stands there already; nothing where there is none.
Outcome<std::optional<BaselineContent>> read_before(const std::string& folder, const Files& files,
                                                    std::vector<std::string>& problems) {
    const std::string path = folder + "/" + baseline_file_name;
    if (!files.exists(path)) return std::optional<BaselineContent>();
    auto text = files.read(path, largest_named_file_bytes);
    if (!text) return text.error();
    const SourceText source(path, std::move(*text));
    auto read = read_baseline(source, files);
    if (auto* wrong = std::get_if<ReadProblems>(&read)) {
        problems.insert(problems.end(), wrong->texts.begin(), wrong->texts.end());
        return std::optional<BaselineContent>();
    }
    Baseline& baseline = std::get<Baseline>(read);
    BaselineContent content;
    content.accepted_utc = baseline.accepted_utc;
    content.output = std::string(baseline.output.name);
    content.channels = baseline.channels;
    content.cases = std::move(baseline.cases);
    return std::optional<BaselineContent>(std::move(content));
}

/// The run judged again by its own plan: what is accepted is what the captures say, not what the record claims.
Outcome<RunResult> judge_all(const RecordedRun& record, const Plan& plan, const Judgement& judgement,
                             const Files& files) {
    RunResult run = judgement.run;
    for (const Judgement::Match& match : judgement.matches) {
        auto result = judge_capture(record, plan, match, files);
        if (!result) return result.error();
        run.cases.push_back(std::move(*result));
    }
    return run;
}

std::string accepted_text(const AcceptedBaseline& accepted, const TextStyle& style) {
    std::string text = "baseline " + printable(accepted.folder) + "\n";
    for (const AcceptedCase& one : accepted.cases) {
        std::string line = padded(name_of(one.state), 9) + printable(one.name);
        if (!one.difference.empty()) line += ": " + printable(one.difference);
        text += wrapped(style, line, 2);
    }
    return text + "  wrote " + counted(accepted.written_files, "file", "files") + ", " +
           counted(accepted.written_bytes, "byte", "bytes") + "\n";
}

}  // namespace

int accept_command(const Options& options, const Desk& desk) {
    std::vector<std::string> problems;
    const auto own = read_own_run(options.run, desk.files, problems);
    if (!problems.empty()) return tell_problems(problems, desk);
    if (!own) return tell(own.error(), options, desk);
    const RecordedRun& record = own->record;
    const Plan& plan = own->plan;
    const auto selected = recorded_cases(record, plan);
    if (!selected) return tell(selected.error(), options, desk);
    const auto judgement = match_captures(record, plan, false, *selected);
    if (!judgement) return tell(judgement.error(), options, desk);
    const auto judged = judge_all(record, plan, *judgement, desk.files);
    if (!judged) return tell(judged.error(), options, desk);
    if (const auto refused = refusal_of_accept(*judged, plan)) return tell(*refused, options, desk);

    AcceptWish wish{root_of(record, options), "", desk.clock.utc(), tool_version,
                    options.kept_samples.value_or(usual_kept_samples)};
    if (desk.files.resolved(wish.root).empty()) {
        return tell({ErrorKind::input, wish.root, "there is no such folder, and the baseline belongs below it",
                     "run it where the check ran, or give the plan's folder with --root"},
                    options, desk);
    }
    // All of them are read before the first is written.
    struct Target {
        std::string baseline;
        std::vector<Judgement::Match> matches;
    };
    std::vector<Target> targets;
    for (auto& [baseline, matches] : cases_by_baseline(plan, judgement->matches)) {
        auto before = read_before(wish.root + "/" + baseline, desk.files, problems);
        if (!before) return tell(before.error(), options, desk);
        targets.push_back({baseline, matches});
    }
    if (!problems.empty()) return tell_problems(problems, desk);
    if (targets.empty()) {
        return tell(
            {ErrorKind::input, record.folder, "none of its cases has an unchanged rule", "capture a case that has one"},
            options, desk);
    }
    const TextStyle style = style_of(desk.terminal, Stream::out, options.colour);
    for (const Target& target : targets) {
        wish.baseline = target.baseline;
        // Two spellings of one folder: what the first wrote stays.
        const auto before = read_before(wish.root + "/" + target.baseline, desk.files, problems);
        if (!before) return tell(before.error(), options, desk);
        if (!problems.empty()) return tell_problems(problems, desk);
        const auto accepted = accept_baseline(record, plan, target.matches, *before, wish, desk.files);
        if (!accepted) {
            Error error = accepted.error();
            // The advice of a run's folder, --out, is no option here.
            if (error.kind == ErrorKind::output)
                error.remedy = "free some space, or give this user the right to write there";
            return tell(error, options, desk);
        }
        if (desk.answer != nullptr) desk.answer->add_baseline(*accepted);
        if (auto written = say(desk, accepted_text(*accepted, style)); !written)
            return tell(written.error(), options, desk);
    }
    return 0;
}

}  // namespace halflsb
