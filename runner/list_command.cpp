// check --list: the cases that would run, on paper.
#include <variant>

#include "runner/choose_cases.hpp"
#include "runner/commands.hpp"
#include "runner/paper.hpp"
#include "runner/report/people.hpp"
#include "runner/world/interrupt.hpp"
#include "runner/world/printable.hpp"

namespace halflsb {
namespace {

std::string start_cell(const ListedCase& listed) {
    const std::string name(name_of(listed.start));
    if (listed.start == Start::flush) return name + ", " + count_text(listed.start_samples) + " zeros";
    if (listed.start == Start::running) return name + ", " + count_text(listed.start_samples) + " discarded";
    return name;
}

std::string list_text(const Plan& plan, const CaseList& list, const std::vector<Rig>& rigs, const TextStyle& style) {
    std::string text = printable(plan.title) + " (" + printable(plan.file) + "), " +
                       counted(static_cast<std::int64_t>(list.cases.size()), "case", "cases") + " would run\n";
    Table table{{{"no", true, 0},
                 {"case", false, 0},
                 {"labels", false, 2},
                 {"channel", true, 3},
                 {"samples", true, 0},
                 {"start", false, 1},
                 {"signal s", true, 4},
                 {"wire s", true, 0}},
                {},
                2};
    for (const ListedCase& listed : list.cases) {
        std::string labels;
        for (const std::string& label : listed.labels) labels += (labels.empty() ? "" : ", ") + printable(label);
        table.rows.push_back({std::to_string(listed.number), printable(listed.name), labels.empty() ? "-" : labels,
                              listed.channel             ? std::to_string(*listed.channel)
                              : plan.signal.channels > 1 ? "all"
                                                         : "1",
                              std::to_string(listed.samples), start_cell(listed), fixed_text(listed.signal_s, 2),
                              listed.wire_s ? fixed_text(*listed.wire_s, 2) : "-"});
    }
    table.rows.push_back({"", "all", "", "", std::to_string(list.samples), "", fixed_text(list.signal_s, 2),
                          list.wire_s ? fixed_text(*list.wire_s, 2) : "-"});
    text += laid_out(style, table);
    if (rigs.empty()) return text + "  with --rig RIG the time on the wire is told\n";
    return text + "  on the wire: " + std::to_string(rigs.front().baud) + " baud, blocks of " +
           std::to_string(rigs.front().block_samples) + " samples, busier direction, zeros before a case included\n";
}

}  // namespace

int list_command(const Options& options, const Desk& desk) {
    const auto read = read_plan_and_rigs(options, desk);
    if (const auto* problems = std::get_if<ReadProblems>(&read)) return tell_problems(problems->texts, desk);
    const auto& [plan, rigs] = std::get<PlanAndRigs>(read);
    if (rigs.size() > 1) {
        return tell({ErrorKind::usage, "--rig",
                     "--list tells the time on the wire of one rig, and there are " + std::to_string(rigs.size()),
                     "give one --rig"},
                    options, desk);
    }
    const auto chosen = choose_cases(plan, options, rigs);
    if (!chosen) return tell(chosen.error(), options, desk);
    if (interrupted()) return tell(interrupted_error(options.plan), options, desk);
    const CaseList list = list_cases(plan, chosen->selected, rigs.empty() ? nullptr : &rigs.front());
    if (desk.answer != nullptr) desk.answer->set_list(list);
    const auto written = say(desk, list_text(plan, list, rigs, style_of(desk.terminal, Stream::out, options.colour)));
    return written ? 0 : tell(written.error(), options, desk);
}

}  // namespace halflsb
