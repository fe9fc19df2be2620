#include "runner/open_run.hpp"

#include <map>
#include <variant>

#include "runner/config/plan_file.hpp"
#include "runner/world/printable.hpp"
#include "runner/world/sha256.hpp"

namespace halflsb {

Outcome<Plan> read_recorded_plan(const RecordedRun& record, const Files& files, std::vector<std::string>& problems) {
    // An archive may have dropped an empty folder.
    const std::string root = files.exists(record.plan_root()) ? record.plan_root() : record.folder;
    PlanOptions options;
    options.root = root;
    options.seed = record.run.seed;
    options.shown_name = record.run.plan_file;
    auto read = read_plan(record.plan_path(), files, options);
    if (auto* wrong = std::get_if<ReadProblems>(&read)) {
        problems = std::move(wrong->texts);
        return Plan{};
    }
    Plan plan = std::move(std::get<Plan>(read));
    // A file that was put there afterwards would make this another plan.
    std::map<std::string, std::string> recorded(record.plan_files.begin(), record.plan_files.end());
    for (const PlanPart& part : plan.parts) {
        if (part.path.empty()) continue;
        const auto found = recorded.find(part.path);
        if (found == recorded.end() || found->second != sha256_of_text(part.bytes)) {
            return Error{ErrorKind::input, root + "/" + printable(part.path),
                         "the plan reads it, and the run did not: it was put there afterwards",
                         "remove it, or capture anew with halflsb check"};
        }
    }
    return plan;
}

Outcome<OwnRun> read_own_run(const std::string& folder, const Files& files, std::vector<std::string>& problems) {
    auto record = read_recorded_run(files, folder);
    if (!record) return record.error();
    if (auto whole = check_recorded_files(*record, files); !whole) return whole.error();
    auto plan = read_recorded_plan(*record, files, problems);
    if (!plan) return plan.error();
    return OwnRun{std::move(*record), std::move(*plan)};
}

}  // namespace halflsb
