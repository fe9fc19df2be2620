// What a run came to: filled case by case by run_plan, read by record and report, and by exit_status.
// Plain data; nothing here talks to the world.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "oracle/judge/verdict.hpp"
#include "stimuli/outcome.hpp"

namespace halflsb {

/// The board as its greeting described it.
struct BoardFacts {
    std::string rig_name;  ///< [board].name
    std::string link;      ///< "/dev/ttyUSB0 at 921600 baud"
    std::string serial;
    std::string build_id;
    std::string filter;
    std::string injection;  ///< "call", "buffer" or "converter"
    int block_samples = 0, credit_blocks = 0;
    int channels = 1;
    std::uint32_t tick_hz = 0;
    int tick_bits = 0;
};

/// Which firmware is this? Design 5.
struct FirmwareCheck {
    enum class State { not_verified, agrees } state = State::not_verified;
    std::string image_file;           ///< of --image, "" without
    std::string image_build_id;       ///< "" without
    bool before_run_skipped = false;  ///< because the board already ran the image
};

/// Of something that each block has one of.
struct Spread {
    double median = 0.0, percentile_99 = 0.0, largest = 0.0;
};

/// How a case travelled.
struct StreamFacts {
    std::int64_t samples_sent = 0, samples_received = 0;  ///< instants, the zeros of a flush among them
    std::int64_t bytes_to_board = 0, bytes_to_host = 0;
    std::int64_t frames_bad_at_host = 0, resends = 0;
    /// The board's own counters; none when it was not or could not be asked.
    std::optional<std::uint32_t> frames_bad_at_board, bytes_lost_at_board, gaps_at_board;
    double streaming_s = 0.0;
    /// Bytes of the busier direction x 10 / baud, over streaming_s; none where baud has no meaning.
    std::optional<double> line_use_ratio;
    std::uint64_t ticks_total = 0;    ///< of the stimulus, without the zeros of a flush
    std::uint32_t ticks_largest = 0;  ///< of one sample
    /// Of the blocks of the stimulus; none where the board counts no ticks, or no block was answered.
    std::optional<Spread> ticks_per_sample, round_trip_s;
};

/// What was sent, so that a later judge knows whether a plan still means it.
struct StimulusFacts {
    std::string shape;
    ParameterValues values;  ///< as the plan gave them: the recipe
    /// Instants; fewer than the stimulus has, where the rules were decided before its end.
    std::int64_t samples = 0;
    std::string sha256;  ///< of the codes of all channels as NPY data; "" when not all were sent
    std::string file;    ///< below the run's folder, where the stimulus is explicit; else ""
};

/// An attempt at a case that did not give a whole capture, and after which the rig allowed another.
struct AttemptResult {
    Error invalid;
    StreamFacts stream;
    std::string started_utc;
    double elapsed_s = 0.0;
    std::string capture_file, capture_sha256;  ///< as in CaseResult
};

struct CaseResult {
    std::size_t number = 0;  ///< from 1, place in the plan
    std::string name;
    CaseVerdict verdict = CaseVerdict::invalid;
    Grade grade = Grade::broken;
    std::optional<Error> invalid;  ///< why the capture is broken
    std::vector<RuleVerdict> rules;
    bool latency_told = false;  ///< this case could tell its latency
    StreamFacts stream;
    std::string started_utc;
    double elapsed_s = 0.0;
    std::string capture_file;  ///< below the run's folder; "" when nothing was captured
    std::string capture_sha256;
    std::string ticks_file, ticks_sha256;  ///< of the board's ticks, where a rule asks for them; else ""
    StimulusFacts stimulus;
    Start start = Start::reset;
    std::int64_t start_samples = 0;  ///< as in Case
    std::vector<CaseSetting> settings;
    std::vector<AttemptResult> attempts;  ///< the invalid ones before this
    std::string rerun;                    ///< the command that repeats this case alone
    std::optional<double> rate_hz;        ///< of the case, where it is not the signal's
    double returned_per_sent = 1.0;       ///< rate of the response over that of the stimulus
    /// It was held against another case's capture; read from a record without its texts for people.
    std::optional<Companion> companion = {};
};

/// A case of the plan, and what it is there to find.
struct CasePurpose {
    std::string name, purpose;
};

/// What the program took upon itself where the plan says nothing.
struct TakenByItself {
    std::vector<CasePurpose> added;     ///< cases of the standard set that run
    std::vector<CasePurpose> left_out;  ///< cases that do not run though nobody took them out
    std::string why_left_out;
    std::vector<std::string> assumed;  ///< of the arithmetic, for derived limits; sentences
};

struct Counts {
    std::size_t pass = 0, fail = 0, invalid = 0, undecided = 0, not_run = 0;
};

struct RunResult {
    std::string tool_version;
    std::string started_utc;
    std::string title, plan_file, rig_file;
    std::string plan_sha256, rig_sha256;
    std::string plan_text, rig_text;    ///< as they were
    std::optional<std::uint64_t> seed;  ///< of --seed
    Signal signal;
    BoardFacts board;
    FirmwareCheck firmware;
    TakenByItself taken;
    bool may_end_early = false;              ///< some case may end before its stimulus does, once its rules are decided
    std::vector<std::string> cases_planned;  ///< names of the selected cases, in order
    std::vector<CaseResult> cases;           ///< those that ran
    std::vector<std::string> warnings;
    /// What ended the run before its last case: an interruption, the bench, a full disk.
    std::optional<Error> ended_by;
    std::string folder;
    double elapsed_s = 0.0;
    std::vector<PlanPart> plan_parts;  ///< files that the plan was read from, as in Plan
    std::string root;                  ///< of --root; "" is the plan's own folder
    int attempts_allowed = 0;          ///< at one case, by the rig; 0 where that is not known

    Counts counts() const;
    /// Some case could tell its latency.
    bool latency_verified() const;
};

}  // namespace halflsb
