// run.json: everything a run came to, for programs. docs/run-folder.md names each key.
#pragma once

#include <string>
#include <vector>

#include "runner/world/result.hpp"

namespace halflsb {

inline constexpr int run_json_version = 2;

/// The whole document. `finished` is false while cases are still to come; a reader that finds it
/// false in a folder nobody writes to knows that the program died.
std::string run_json(const RunResult& run, bool finished);

/// The verdict section of that document, from the brace on: all that plan and captures decide, and nothing of time,
/// wire or folders. Judging the captures again by the same plan gives the same bytes.
std::string verdict_text(const RunResult& run);

/// The same again and again while a run grows: a case that was written once is not rendered again, so a
/// thousand cases cost a thousand renderings, not half a million. Finished cases must not change.
class GrowingRunJson {
public:
    std::string document(const RunResult& run, bool finished);

private:
    std::vector<std::string> verdict_texts_, case_texts_;
};

}  // namespace halflsb
