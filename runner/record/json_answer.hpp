// The one document that --json makes of standard output. docs/json.md and docs/answer.schema.json describe it.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "runner/world/comparison.hpp"
#include "runner/world/explanation.hpp"
#include "runner/world/prediction.hpp"
#include "runner/world/result.hpp"
#include "stimuli/outcome.hpp"

namespace halflsb {

inline constexpr int json_answer_version = 2;

/// A case that would run.
struct ListedCase {
    std::size_t number = 0;  ///< in the plan, from 1
    std::string name;
    std::vector<std::string> labels;
    std::optional<int> channel;  ///< the driven one; none: all of them
    std::int64_t samples = 0;
    Start start = Start::reset;
    std::int64_t start_samples = 0;  ///< zeros sent before it, or leading samples that no rule looks at
    double signal_s = 0.0;           ///< of its samples and of zeros before them, at the case's rate
    std::optional<double> wire_s;    ///< where a rig says the baud
};

struct CaseList {
    std::vector<ListedCase> cases;
    std::int64_t samples = 0;
    double signal_s = 0.0;
    std::optional<double> wire_s;
};

/// What accept came to, a baseline.
struct AcceptedCase {
    enum class State { new_case, same, changed, stays } state = State::new_case;
    std::string name;
    std::optional<std::int64_t> first_different_samples;  ///< where it is known to the sample
    std::string difference;                               ///< of a changed one, in words
};
std::string_view name_of(AcceptedCase::State state);

struct AcceptedBaseline {
    std::string folder;
    std::vector<AcceptedCase> cases;
    std::int64_t written_bytes = 0;
    int written_files = 0;
};

struct ListedPort {
    std::string device, stable_name, description;
};

class JsonAnswer {
public:
    /// `command` is a word of the command line, or "" where there was none that is known.
    JsonAnswer(std::string_view command, std::string_view tool_version);

    /// What ended the command instead of a result. The first counts.
    void set_error(const Error& error);
    /// All that is wrong with the files, whole messages.
    void set_problems(const std::vector<std::string>& problems);
    /// A document of run.json, which is put in as it is, byte for byte.
    void add_run(std::string document);
    void set_list(const CaseList& list);
    void add_baseline(const AcceptedBaseline& baseline);
    void set_ports(const std::vector<ListedPort>& ports);
    void set_prediction(const Prediction& prediction);
    void add_explanation(const Explanation& explanation);
    void set_comparison(const Comparison& comparison);

    std::string text(int exit_status) const;

private:
    std::string command_, tool_version_;
    std::optional<Error> error_;
    std::vector<std::string> problems_, runs_, baselines_, explanations_;
    std::string list_ = "null", prediction_ = "null", comparison_ = "null", ports_ = "[]";  ///< rendered
};

}  // namespace halflsb
