#include "oracle/explain/board_model.hpp"

#include <algorithm>

#include "oracle/arithmetic/described.hpp"

namespace halflsb {
namespace {

constexpr std::size_t piece_samples = 4096;

std::unique_ptr<Twin> twin_of(const BoardDescription& board, const Signal& signal) {
    auto described = describe(board.filter, signal.input, signal.output, signal.output_per_input).described;
    if (!described) return nullptr;
    const SumChange& sum = board.sum;
    if (sum.stage < described->stages.size()) {
        described->stages[sum.stage].sum_constant_eighths = sum.constant_eighths;
        if (sum.divisor > 0) described->stages[sum.stage].divisor = sum.divisor;
    }
    return make_twin(*described);
}

}  // namespace

BoardModel::BoardModel(const BoardDescription& board, const Signal& signal, std::unique_ptr<Twin> twin)
    : passage_(board.passage),
      input_map_(board.input),
      output_map_(board.output),
      reset_kind_(board.reset),
      reset_places_(board.reset_places),
      filter_(board.filter),
      input_(signal.input),
      output_(signal.output),
      twin_(std::move(twin)),
      held_(zero_code(signal.output)) {
    const bool asks = board.reset == ResetKind::ring_start || board.reset == ResetKind::ring_begun_anew ||
                      board.reset == ResetKind::ring_places;
    if (asks) ring_.assign(ring_length(board.filter), 0);
}

std::unique_ptr<BoardModel> BoardModel::make(const BoardDescription& board, const Signal& signal) {
    auto twin = twin_of(board, signal);
    if (twin == nullptr) return nullptr;
    const bool is_steady = twin->outputs_for(1) == 1 && twin->outputs_for(5) == 5;
    const bool needs_steady = board.passage.kind != PassageKind::plain && board.passage.kind != PassageKind::late;
    if (needs_steady && !is_steady) return nullptr;
    return std::unique_ptr<BoardModel>(new BoardModel(board, signal, std::move(twin)));
}

void BoardModel::reset() {
    is_first_sample_ = reset_kind_ == ResetKind::first_sample;
    if (reset_kind_ == ResetKind::whole || is_first_case_ || is_first_sample_) {
        twin_->reset();
    } else if (reset_kind_ != ResetKind::none) {
        StateBefore before{twin_->state(), since_reset_, 0};
        if (!ring_.empty()) before.oldest = ring_[static_cast<std::size_t>(since_reset_) % ring_.size()];
        twin_->reset();
        const std::vector<std::int64_t> cleared = twin_->state();
        twin_->set_state(left_by(reset_kind_, reset_places_, filter_, std::move(before), cleared));
    }
    // A place in a ring that stays is counted on.
    if (reset_kind_ != ResetKind::ring_start) since_reset_ = 0;
}

void BoardModel::begin_case(Start start, std::int64_t start_samples) {
    if (start == Start::reset) reset();
    is_first_case_ = false;
    index_ = 0;
    repeat_left_ = 0;
    held_ = zero_code(output_);
    past_in_.assign(static_cast<std::size_t>(passage_.samples_ago()), zero_code(input_));
    past_out_.assign(static_cast<std::size_t>(passage_.samples_ago()), zero_code(output_));
    if (start != Start::flush) return;
    std::vector<Code> zeros(piece_samples, zero_code(input_)), lost;
    apply(input_map_, input_, zeros);
    for (std::int64_t left = start_samples; left > 0; left -= std::ssize(zeros)) {
        zeros.resize(static_cast<std::size_t>(std::min(left, std::ssize(zeros))));
        lost.clear();
        run(zeros, lost);
    }
}

void BoardModel::process(std::span<const Code> in, std::vector<Code>& out) {
    while (!in.empty()) {
        const std::size_t count = std::min(piece_samples, in.size());
        mapped_.assign(in.begin(), in.begin() + static_cast<std::ptrdiff_t>(count));
        apply(input_map_, input_, mapped_);
        const std::size_t before = out.size();
        pass(mapped_, out);
        apply_at_output(output_map_, output_, std::span(out).subspan(before));
        in = in.subspan(count);
    }
}

void BoardModel::pass(std::span<const Code> in, std::vector<Code>& out) {
    switch (passage_.kind) {
        case PassageKind::plain:
            return run(in, out);
        case PassageKind::late:
            return pass_late(in, out);
        case PassageKind::each_nth:
        case PassageKind::twice:
            return pass_often(in, out);
        default:
            return pass_events(in, out);
    }
}

void BoardModel::keep(std::span<const Code> in) {
    if (is_first_sample_ && !in.empty()) {
        std::vector<std::int64_t> words(twin_->state().size(), std::int64_t{in.front()} - zero_code(input_));
        twin_->set_state(words);
        is_first_sample_ = false;
    }
    if (ring_.empty()) return;
    for (std::size_t n = 0; n < in.size(); ++n)
        ring_[(static_cast<std::size_t>(since_reset_) + n) % ring_.size()] = std::int64_t{in[n]} - zero_code(input_);
}

void BoardModel::run(std::span<const Code> in, std::vector<Code>& out) {
    keep(in);
    const std::size_t before = out.size();
    out.resize(before + twin_->outputs_for(in.size()));
    twin_->process(in, std::span(out).subspan(before));
    since_reset_ += std::ssize(in);
}

Code BoardModel::run_one(Code code) {
    keep(std::span<const Code>(&code, 1));
    Code result = 0;
    twin_->process(std::span<const Code>(&code, 1), std::span<Code>(&result, 1));
    ++since_reset_;
    return result;
}

void BoardModel::pass_late(std::span<const Code> in, std::vector<Code>& out) {
    const auto before = static_cast<std::ptrdiff_t>(out.size());
    run(in, out);
    // past_out_ has as many outputs as the board is late.
    std::vector<Code>& waiting = past_out_;
    waiting.insert(waiting.end(), out.begin() + before, out.end());
    const std::ptrdiff_t count = std::ssize(out) - before;
    std::copy_n(waiting.begin(), count, out.begin() + before);
    waiting.erase(waiting.begin(), waiting.begin() + count);
}

void BoardModel::pass_often(std::span<const Code> in, std::vector<Code>& out) {
    for (const Code code : in) {
        if (passage_.kind == PassageKind::each_nth) {
            if (index_ % passage_.length == passage_.first) held_ = run_one(code);
        } else {
            for (std::int64_t call = 0; call < passage_.length; ++call) held_ = run_one(code);
        }
        out.push_back(held_);
        ++index_;
    }
}

Code BoardModel::output_ago(const std::vector<Code>& out, std::int64_t samples) const {
    if (samples <= std::ssize(out)) return out[out.size() - static_cast<std::size_t>(samples)];
    const std::int64_t before = samples - std::ssize(out);
    if (before > std::ssize(past_out_)) return zero_code(output_);
    return past_out_[past_out_.size() - static_cast<std::size_t>(before)];
}

void BoardModel::pass_events(std::span<const Code> in, std::vector<Code>& out) {
    std::vector<Code> passed;
    std::size_t at = 0;
    while (at < in.size()) {
        const std::int64_t until = next_event(passage_, index_) - index_;
        if (until == 0 || repeat_left_ > 0) {
            event(in, at, passed);
            continue;
        }
        const auto count =
            static_cast<std::size_t>(std::min<std::int64_t>(until, std::ssize(in) - static_cast<std::ptrdiff_t>(at)));
        run(in.subspan(at, count), passed);
        past_in_.insert(past_in_.end(), in.begin() + static_cast<std::ptrdiff_t>(at),
                        in.begin() + static_cast<std::ptrdiff_t>(at + count));
        index_ += static_cast<std::int64_t>(count);
        at += count;
    }
    out.insert(out.end(), passed.begin(), passed.end());
    past_out_.insert(past_out_.end(), passed.begin(), passed.end());
    const auto keep = [&](std::vector<Code>& past) {
        const std::ptrdiff_t surplus = std::ssize(past) - passage_.samples_ago();
        if (surplus > 0) past.erase(past.begin(), past.begin() + surplus);
    };
    keep(past_in_);
    keep(past_out_);
}

/// One sample at which something happens.
void BoardModel::event(std::span<const Code> in, std::size_t& at, std::vector<Code>& out) {
    const Code code = in[at++];
    Code fed = code;
    if (repeat_left_ == 0 && has_blocks(passage_.kind)) repeat_left_ = passage_.length;
    const Code last = output_ago(out, 1);
    switch (passage_.kind) {
        case PassageKind::lost:
            out.push_back(last);
            break;
        case PassageKind::lost_shifted:
            break;
        case PassageKind::doubled:
            run_one(code);
            out.push_back(run_one(code));
            break;
        case PassageKind::doubled_shifted:
            out.push_back(run_one(code));
            out.push_back(run_one(code));
            break;
        case PassageKind::output_lost:
            run_one(code);
            break;
        case PassageKind::output_doubled:
            out.push_back(run_one(code));
            out.push_back(out.back());
            break;
        case PassageKind::block_repeated:
            --repeat_left_;
            fed = past_in_[past_in_.size() - static_cast<std::size_t>(passage_.samples_ago())];
            out.push_back(run_one(fed));
            break;
        case PassageKind::output_block_repeated:
            --repeat_left_;
            run_one(code);
            out.push_back(output_ago(out, passage_.samples_ago()));
            break;
        case PassageKind::block_skipped:
            --repeat_left_;
            out.push_back(output_ago(out, passage_.samples_ago()));
            break;
        case PassageKind::sample_replaced:
            fed = static_cast<Code>(zero_code(input_) - (std::int64_t{1} << (input_.word_bits - 1)));
            out.push_back(run_one(fed));
            break;
        case PassageKind::state_cleared:
            twin_->reset();
            out.push_back(run_one(code));
            break;
        case PassageKind::state_exchanged: {
            std::vector<std::int64_t> words = twin_->state();
            if (words.size() > 1) std::swap(words[words.size() - 1], words[words.size() - 2]);
            twin_->set_state(words);
            out.push_back(run_one(code));
            break;
        }
        default:
            break;
    }
    // What is taken again is what the line brought.
    past_in_.push_back(has_blocks(passage_.kind) ? code : fed);
    ++index_;
}

}  // namespace halflsb
