// What came out: a judged figure, a rule's verdict, a case's verdict.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "oracle/rules/rule.hpp"
#include "stimuli/sample_format.hpp"

namespace halflsb {

/// In order: the worse, the later.
enum class Verdict { pass, undecided, fail };
std::string_view name_of(Verdict verdict);

/// How whole a capture is (design 2). A broken one is judged by no rule.
enum class Grade { proven, plausible, broken };
std::string_view name_of(Grade grade);

/// Of a case: fail > invalid > undecided > pass.
enum class CaseVerdict { pass, undecided, invalid, fail };
std::string_view name_of(CaseVerdict verdict);

/// One number held against one limit. Numbers are rounded to 9 significant digits before they are
/// compared, so that a verdict does not hang on the last bits of a logarithm.
struct JudgedFigure {
    std::string name;             ///< "max", "rms", "bias", "snr", "latency", "gain at 50 Hz"
    std::optional<double> value;  ///< none: could not be measured (then `note` says why) or exact match
    std::optional<double> limit;
    std::optional<double> margin;  ///< distance to the limit, positive means room left
    std::string unit;              ///< "LSB", "dB", "samples", "of full scale" or the plan's unit
    bool at_least = false;         ///< the value must be at least the limit, not at most
    Verdict verdict = Verdict::pass;
    std::string note;
    /// Standard uncertainty of the value; none: the capture has this value exactly.
    std::optional<double> uncertainty = {};

    bool passed() const { return verdict == Verdict::pass; }
};

/// Codes around a sample, for the report.
struct Neighbourhood {
    std::int64_t index = -1;        ///< the bad sample, in the stimulus's index
    std::int64_t first_index = -1;  ///< index of the first element of the vectors
    std::vector<Code> stimulus, response;
    std::vector<double> reference;  ///< in LSB of the output, or values for f32
};

/// What a decision took that could stop early.
struct Evidence {
    std::int64_t samples = 0;         ///< judged until it was decided, or in all
    std::int64_t budget_samples = 0;  ///< those of the whole stimulus
    /// A test of one length, fixed beforehand, with the same alpha, beta and zone needs so many.
    double fixed_length_samples = 0.0;
};

struct RuleVerdict {
    Rule rule;
    Verdict verdict = Verdict::undecided;
    std::string reference;  ///< "declared", "design", "accepted"
    std::vector<JudgedFigure> figures;
    std::string
        reason;  ///< of an undecided one; or what the reader should know ("judged at the measured lag of 1 sample")
    std::optional<Neighbourhood> first_bad;
    int channel = 0;  ///< of the response, counted from 1; 0: the signal has only one
    std::optional<Evidence> evidence = {};
};

/// fail > undecided > pass over the figures.
Verdict worst_of(const std::vector<JudgedFigure>& figures);
/// The same over the rules.
CaseVerdict verdict_of(const std::vector<RuleVerdict>& rules);

/// `value` to 9 significant digits (decimal, round half even of the exact value).
double judged(double value);

inline Verdict pass_or_fail(bool passes) { return passes ? Verdict::pass : Verdict::fail; }

}  // namespace halflsb
