// What the firmware's team asks: facts of the signal, the filter, and cases with their rules. The
// reader (runner/config) makes one from a file; everything in it has been checked against itself.
#pragma once

#include <cstdint>
#include <memory>
#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "oracle/filters/filter.hpp"
#include "oracle/judge/certainty.hpp"
#include "oracle/rules/rule.hpp"
#include "stimuli/sample_format.hpp"
#include "stimuli/stimulus.hpp"

namespace halflsb {

/// Facts of the firmware; the board's greeting must agree.
struct Signal {
    double rate_hz = 0.0;
    SampleFormat input, output;
    /// Value out per value in at gain 1; 1 within one family of formats.
    double output_per_input = 1.0;
    std::string filter;  ///< the board's name for it; empty: the only one the board has
    std::string unit;    ///< engineering unit of the output, "" when none was given
    std::optional<double> full_scale_unit;
    Rounding quantise = Rounding::half_up;             ///< of the stimuli
    int channels = 1;                                  ///< in and out; samples of one instant are adjacent
    std::string input_unit = {};                       ///< engineering unit of the input
    std::optional<double> input_full_scale_unit = {};  ///< what full scale of the input means in it
};

/// In which state the filter gets the first sample of a case.
enum class Start {
    reset,    ///< as after power-up: the wire can reset
    flush,    ///< zeros are sent first, until nothing of what went before is left
    running,  ///< as the case before left it; leading samples are judged by no rule
};
std::string_view name_of(Start start);

/// A setting of the firmware that a case changes before its first sample.
struct CaseSetting {
    std::string name;  ///< as the board's greeting has it
    std::int32_t value = 0;
    PlanPosition position;
};

/// One stimulus with its rules.
struct Case {
    std::string name;
    std::string shape;
    ParameterValues stimulus_values;  ///< as the plan gave them, for records and for --seed
    std::shared_ptr<const Stimulus> stimulus;
    std::vector<Rule> rules;  ///< those of the case, those for every case, and a latency rule in any event
    PlanPosition position;
    PlanPosition length_position = {};     ///< of the stimulus' length_samples, or of the stimulus where it has none
    PlanPosition discard_position = {};    ///< of discard_samples
    std::vector<std::string> labels = {};  ///< --label selects by them
    Start start = Start::reset;
    /// Zeros sent before the stimulus (flush), or leading samples that no rule looks at (running).
    std::int64_t start_samples = 0;
    std::vector<CaseSetting> settings = {};
    std::optional<int> channel = {};     ///< the driven one, counted from 1, the others get zeros; none: all are driven
    std::optional<double> rate_hz = {};  ///< in place of the signal's
    std::optional<FilterChain> filter = {};  ///< in place of the plan's, where the rate makes another design
    std::string purpose = {};                ///< what it is there to find, for reports; "" when the plan says nothing
    bool is_standard = false;                ///< of the standard set: the plan has no case of its own
    bool has_companions = false;             ///< cases behind it are held against what comes back for it
    std::optional<Companion> companion = {};  ///< it is one of those
};

/// A file that the plan was read from: itself, what it includes, and what it names.
struct PlanPart {
    std::string path;   ///< below the root; of the plan itself "" (it may lie outside the root)
    std::string bytes;  ///< as they were
};

class LimitStore;
/// limit_store.hpp
std::shared_ptr<LimitStore> make_limit_store();

struct Plan {
    std::string title;
    std::string file;
    Signal signal;
    FilterChain filter;  ///< as written, stages of every channel
    std::vector<PlanPosition> filter_positions = {};  ///< where each stage stands; empty of a plan that no file has
    std::vector<Case> cases;
    Certainty certainty = {};
    bool streams_whole = false;        ///< each stimulus to its end, also when the rules of its case are decided
    bool filter_is_unknown = false;    ///< kind = "unknown": there is no reference
    std::vector<PlanPart> parts = {};  ///< the plan first, then in the order of reading, each path once
    /// What limits were derived so far, shared by copies; never empty.
    std::shared_ptr<LimitStore> limits = make_limit_store();
};

double rate_hz_of(const Plan& plan, const Case& the_case);
/// The stages that a channel of the case passes; channels count from 1. Each has its Initial in a case that starts with
/// a reset, and zeros in any other.
FilterChain chain_of(const Plan& plan, const Case& the_case, int channel);
/// Whether the channel gets the stimulus, or zeros.
bool is_driven(const Case& the_case, int channel);

/// The codes that are sent: instants first_index, first_index + 1 ..., each with a code a channel, adjacent.
void fill_case_codes(const Plan& plan, const Case& the_case, std::int64_t first_index, std::span<Code> codes);

}  // namespace halflsb
