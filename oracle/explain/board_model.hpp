// A board as a hypothesis describes it, to the bit: codes in, codes out, case after case.
#pragma once

#include <cstdint>
#include <memory>
#include <span>
#include <vector>

#include "oracle/arithmetic/twin.hpp"
#include "oracle/explain/hypothesis.hpp"
#include "oracle/judge/plan.hpp"

namespace halflsb {

class BoardModel {
public:
    /// nullptr where no twin can be made of the description, or its passage needs one sample back for each.
    static std::unique_ptr<BoardModel> make(const BoardDescription& board, const Signal& signal);

    /// The next case: reset, as this board resets, or zeros, or nothing (`running`).
    void begin_case(Start start, std::int64_t start_samples);
    /// Appends what comes back for the next codes of the case. A passage that loses or doubles samples may have
    /// returned fewer or more than were sent.
    void process(std::span<const Code> in, std::vector<Code>& out);

private:
    BoardModel(const BoardDescription& board, const Signal& signal, std::unique_ptr<Twin> twin);

    void reset();
    void pass(std::span<const Code> in, std::vector<Code>& out);
    void pass_late(std::span<const Code> in, std::vector<Code>& out);
    void pass_often(std::span<const Code> in, std::vector<Code>& out);
    void pass_events(std::span<const Code> in, std::vector<Code>& out);
    void event(std::span<const Code> in, std::size_t& at, std::vector<Code>& out);
    void keep(std::span<const Code> in);
    void run(std::span<const Code> in, std::vector<Code>& out);
    Code run_one(Code code);
    Code output_ago(const std::vector<Code>& out, std::int64_t samples) const;

    Passage passage_;
    CodeMap input_map_, output_map_;
    ResetKind reset_kind_;
    int reset_places_;
    FilterChain filter_;
    std::int64_t since_reset_ = 0;    ///< samples that the filter got
    std::vector<std::int64_t> ring_;  ///< what it got, by its number modulo the ring; where the reset asks for it
    bool is_first_sample_ = false;    ///< the next one fills the state
    SampleFormat input_, output_;
    std::unique_ptr<Twin> twin_;
    std::int64_t index_ = 0;  ///< of the next sample of the case
    bool is_first_case_ = true;
    Code held_ = 0;  ///< the last output
    std::vector<Code> mapped_, past_in_, past_out_;
    std::int64_t repeat_left_ = 0;
};

}  // namespace halflsb
