#include "tests/diagnostics/plan_page.hpp"

#include "runner/config/plan_file.hpp"

namespace halflsb::diagnostics {

std::string Parts::text() const {
    return "title = \"CW-7 load cell\"\n[signal]\n" + signal + "[[filter]]\n" + filter + "[[rule]]\n" + rule +
           "[[case]]\nname = \"belt noise\"\n" + of_case + "[case.stimulus]\n" + stimulus + after;
}

void show_plan(Page& page, std::string_view done, const std::string& text, FakeFiles files) {
    files.contents["plan.toml"] = text;
    const auto read = read_plan("plan.toml", files);
    std::string told;
    if (const auto* problems = std::get_if<ReadProblems>(&read)) {
        for (const std::string& problem : problems->texts) told += problem + (problem.ends_with('\n') ? "" : "\n");
    }
    page.show(done, told);
}

void show_changes(Page& page, const std::string& good, const std::vector<Change>& changes, const FakeFiles& files) {
    for (const Change& change : changes) show_plan(page, change.done, spoilt(good, change.from, change.to), files);
}

}  // namespace halflsb::diagnostics
