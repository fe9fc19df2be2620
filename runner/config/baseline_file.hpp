// A baseline: what `halflsb accept` kept of a good run, in a folder under the plan's root, for the rule `unchanged`.
//
// baseline.toml says of each case how many samples there were and the SHA-256 of what was sent and of what came back;
// the first samples that came back stand beside it as NPY (docs/run-folder.md).
#pragma once

#include <map>
#include <memory>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "runner/config/reader.hpp"
#include "runner/world/baseline.hpp"

namespace halflsb {

/// What to do about a baseline that is not as `accept` wrote it.
inline constexpr std::string_view damaged_remedy =
    "take the baseline as it was committed, or remove its folder and accept a good run anew";

/// baseline.toml as it stands in the file.
struct Baseline {
    std::string accepted_utc;
    SampleFormat output;
    int channels = 1;
    std::vector<BaselineCase> cases;
};

/// Or the rendered messages.
std::variant<Baseline, ReadProblems> read_baseline(const SourceText& source, const Files& files);

/// Gives each rule `unchanged` of a plan what its baseline accepted. Reads each folder once.
class BaselineFiles {
public:
    /// Problems are told at the rule.
    explicit BaselineFiles(ReadContext& context) : context_(context) {}

    /// Sets rule.accepted, or rule.missing where there is no such folder or no such case in it; a baseline of
    /// another stimulus, format, count of channels or length, and a damaged one, are refused. Costs a pass of the
    /// stimulus.
    void take(const Plan& plan, const Case& the_case, Place place, UnchangedRule& rule);

private:
    /// nullptr: none there, or refused at `place`; the flag tells which.
    struct Folder {
        std::optional<Baseline> baseline;
        bool is_missing = false;
        bool is_refused = false;
    };
    const Folder& folder_at(const std::string& path, Place place);
    /// What differs between the plan's case and the accepted one, or "".
    std::string difference(const Plan& plan, const Case& the_case, const Baseline& baseline,
                           const BaselineCase& entry) const;
    std::optional<std::vector<Code>> kept_codes(const UnchangedRule& rule, const Baseline& baseline,
                                                const BaselineCase& entry, Place place);

    ReadContext& context_;
    std::map<std::string, Folder> folders_;
};

}  // namespace halflsb
