#include "runner/ask_board.hpp"

#include <algorithm>
#include <deque>
#include <numeric>
#include <variant>

#include "oracle/arithmetic/described.hpp"
#include "oracle/explain/probes.hpp"
#include "runner/config/question_plan.hpp"
#include "runner/report/people.hpp"
#include "runner/run_plan.hpp"
#include "runner/world/interrupt.hpp"

namespace halflsb {
namespace {

bool is_in_doubt(const ExplainedChannels& one) { return one.finding.kind == FindingKind::several; }

std::vector<BoardDescription> boards_of(const ExplainedChannels& one) {
    std::vector<BoardDescription> boards;
    for (const EquivalenceClass& cause : one.finding.search.classes)
        boards.push_back(cause.members.front().hypothesis.board);
    return boards;
}

class Asking {
public:
    Asking(const AskRequest& request, Files& files, const Clock& clock, RunObserver& observer)
        : request_(request), files_(files), clock_(clock), observer_(observer), signal_(request.run.own.plan.signal) {}

    Outcome<AskResult> run() {
        auto first = explain();
        if (!first) return first.error();
        AskResult result{std::move(*first), std::nullopt};
        for (int round = 0; has_doubt(result.explanation); ++round) {
            if (round == most_rounds_of_questions || !request_.may_ask()) {
                result.explanation.not_asked = "the time or the rounds of questions are over";
                break;
            }
            const auto asked = ask_once(result.explanation);
            if (!asked) {
                result.ended_by = asked.error();
                break;
            }
            if (!*asked) break;
        }
        return result;
    }

private:
    static bool has_doubt(const Explanation& explanation) {
        return std::any_of(explanation.channels.begin(), explanation.channels.end(), is_in_doubt);
    }

    Outcome<Explanation> explain() {
        std::vector<RunPart> parts{request_.run.part()};
        for (const OpenedCaptures& answered : answered_) parts.push_back(answered.part());
        return explain_runs(parts, files_, request_.go_on);
    }

    /// One round; false: there is nothing that could be asked.
    Outcome<bool> ask_once(Explanation& explanation) {
        const std::vector<Probe> questions = questions_for(explanation);
        if (questions.empty()) {
            explanation.not_asked = "no stimulus that stays within the levels of the run tells them apart";
            return false;
        }
        auto folder = stream(questions);
        if (!folder) return folder.error();
        if (auto read = read_back(*folder); !read) return read.error();
        std::vector<AskedRun> asked = std::move(explanation.asked);
        asked.push_back({*folder, answers_to(questions, explanation)});
        auto again = explain();
        if (!again) return again.error();
        explanation = std::move(*again);
        explanation.asked = std::move(asked);
        return true;
    }

    std::vector<Probe> questions_for(const Explanation& explanation) const {
        std::vector<Probe> questions;
        for (const ExplainedChannels& one : explanation.channels) {
            if (!is_in_doubt(one)) continue;
            const std::vector<Probe> probes = probes_for(signal_, one.peak_ratio);
            for (const std::size_t place : separating_probes(boards_of(one), signal_, probes)) {
                const bool is_new = std::none_of(questions.begin(), questions.end(), [&](const Probe& other) {
                    return other.codes == probes[place].codes;
                });
                if (is_new) questions.push_back(probes[place]);
            }
        }
        return questions;
    }

    static std::string name_of_question(std::size_t place, const Probe& probe) {
        return "question " + std::to_string(place + 1) + ", " + probe.what;
    }

    /// Beside the run, under a name that is free.
    std::string free_folder() const {
        std::string folder = request_.run.own.record.folder;
        while (folder.size() > 1 && folder.back() == '/') folder.pop_back();
        folder += "-asked";
        std::string free = folder;
        for (int i = 2; files_.exists(free); ++i) free = folder + "-" + std::to_string(i);
        return free;
    }

    /// Files that the run's plan names lie in its folder.
    PlanOptions plan_options() const {
        const RecordedRun& record = request_.run.own.record;
        PlanOptions options;
        options.root = files_.exists(record.plan_root()) ? record.plan_root() : record.folder;
        return options;
    }

    Outcome<Plan> read(const std::string& text, const std::string& path) const {
        auto plan = read_plan_text(text, path, files_, plan_options());
        if (auto* problems = std::get_if<ReadProblems>(&plan))
            return Error{ErrorKind::defect, path, problems->texts.front(), ""};
        return std::get<Plan>(std::move(plan));
    }

    Outcome<std::string> text_of(const std::vector<Probe>& questions, bool first_flushes) const {
        const RecordedRun& record = request_.run.own.record;
        std::vector<QuestionCase> cases;
        for (std::size_t i = 0; i < questions.size(); ++i) {
            cases.push_back({name_of_question(i, questions[i]), "tells apart what the captures of the run leave open",
                             questions[i].words});
        }
        auto text = question_plan(record.plan_path(), files_, plan_options(), cases, has_twin(), first_flushes);
        if (auto* problems = std::get_if<ReadProblems>(&text))
            return Error{ErrorKind::defect, record.plan_path(), problems->texts.front(), ""};
        return std::get<std::string>(std::move(text));
    }

    bool has_twin() const {
        const auto described =
            describe(request_.run.own.plan.filter, signal_.input, signal_.output, signal_.output_per_input).described;
        return described && !described->missing;
    }

    /// The folder of the run that asked.
    Outcome<std::string> stream(const std::vector<Probe>& questions) {
        RunRequest run;
        const std::string folder = free_folder();
        // What the board holds at the start nobody knows; a filter that never forgets cannot be flushed.
        Outcome<Plan> plan = Error{ErrorKind::defect, "", "not read", ""};
        for (const bool first_flushes : {true, false}) {
            auto text = text_of(questions, first_flushes);
            if (!text) return text.error();
            run.plan_text = std::move(*text);
            plan = read(run.plan_text, folder + "/plan.toml");
            if (plan) break;
        }
        if (!plan) return plan.error();
        run.tool_version = request_.tool_version;
        run.plan = std::move(*plan);
        run.selected.resize(run.plan.cases.size());
        std::iota(run.selected.begin(), run.selected.end(), std::size_t{0});
        run.out = folder;
        if (run.plan.parts.size() > 1) run.root = folder + "/" + plan_files_folder;
        set_firmware(run);
        RunResult result = run_plan(run, files_, clock_, observer_);
        if (result.ended_by) return *result.ended_by;
        return result.folder;
    }

    /// Another firmware would answer for this one.
    void set_firmware(RunRequest& run) const {
        run.rig = request_.rig;
        run.rig_text = request_.rig_text;
        const RecordedRun& record = request_.run.own.record;
        if (record.run.board.build_id.empty()) {
            run.warnings.push_back(
                "the firmware of the run has no build-id: nobody checks that the board still has it");
        } else {
            run.image = Image{record.folder, record.run.board.build_id};
        }
        // There is no image to flash.
        if (wants_image(run.rig)) run.rig.before_run.clear();
    }

    Outcome<void> read_back(const std::string& folder) {
        auto opened = open_fresh_captures(folder, files_);
        if (!opened) return opened.error();
        answered_.push_back(std::move(*opened));
        return {};
    }

    /// Which of the causes before the round say that something else should have come back, question by question.
    std::vector<AskedQuestion> answers_to(const std::vector<Probe>& questions, const Explanation& before) const {
        std::vector<AskedQuestion> answers;
        for (std::size_t i = 0; i < questions.size(); ++i)
            answers.push_back({name_of_question(i, questions[i]), questions[i].what, {}, 0});
        for (const ExplainedChannels& one : before.channels) {
            if (!is_in_doubt(one)) continue;
            const auto captures = channel_captures(answered_.back().part(), files_, one.channels.front());
            if (!captures) continue;
            for (const EquivalenceClass& cause : one.finding.search.classes) {
                const Hypothesis& first = cause.members.front().hypothesis;
                for (std::size_t i = 0; i < std::min(answers.size(), captures->size()); ++i) {
                    const std::vector<ChannelCapture> until(captures->begin(),
                                                            captures->begin() + static_cast<std::ptrdiff_t>(i) + 1);
                    if (CaptureSet(signal_, until).until_first_wrong(first.board).is_exact()) {
                        ++answers[i].left;
                        continue;
                    }
                    answers[i].ruled_out.push_back({one.channels, first.what()});
                    break;
                }
            }
        }
        return answers;
    }

    const AskRequest& request_;
    Files& files_;
    const Clock& clock_;
    RunObserver& observer_;
    const Signal& signal_;
    std::deque<OpenedCaptures> answered_;
};

}  // namespace

Outcome<AskResult> ask_board(const AskRequest& request, Files& files, const Clock& clock, RunObserver& observer) {
    return Asking(request, files, clock, observer).run();
}

}  // namespace halflsb
